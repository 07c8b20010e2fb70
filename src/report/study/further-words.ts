import type { FurtherTest } from "../../plan/further.js";
import type { SameCurve } from "../../plan/same-curve.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import { inUnit } from "../../units/unit.js";

/** Most tests that are told. */
const told = 4;

/** What further tests would narrow, the most telling first; nothing where none narrows much. */
export function furtherWords(tests: readonly FurtherTest[]): string[] {
  return tests.slice(0, told).map(({ says, remains, parameters }, k) => {
    const ends = parameters.map(({ name, unit, after }) =>
      after
        ? `${name} ${after.map((v) => formatNumber(inUnit(v, unit), 3)).join(" to ")} ${unit.name}`.trim()
        : `${name} still untold`,
    );
    const first = k === 0 ? "What a further test would narrow most: " : "Next: ";
    return `${first}${says} (intervals ${formatNumber(100 * remains, 2)} % as wide: ${ends.join(", ")})`;
  });
}

/** A network of the same curve, with the values that make it so. */
export const sameCurveWords = ({ title, path, parameters }: SameCurve): string =>
  `'${title}' (${path}) with ${parameters.map((p) => `${p.name} ${formatQuantity(p.value, p.unit, 3)}`).join(", ")} shows the same curve`;
