import { typeset } from "../../draw/scale.js";
import type { FurtherTest } from "../../plan/further.js";
import type { SameCurve } from "../../plan/same-curve.js";
import { formatNumber, formatQuantity } from "../../units/format.js";
import type { Unit } from "../../units/unit.js";
import { estimateWords } from "../digits.js";
import type { FurtherTests } from "../input.js";
import { estimate } from "./estimate.js";

/** Most tests that are told. */
const told = 4;

/** What further tests would narrow, the most telling first; nothing where none narrows much. */
export function furtherOf(tests: readonly FurtherTest[]): FurtherTests | undefined {
  const [first] = tests;
  if (!first) return undefined;
  return {
    heads: first.parameters.map(({ name, unit }) => (unit.name === "" ? name : `${name}, ${typeset(unit.name)}`)),
    now: first.parameters.map(({ now, unit }) => ends(now, unit)),
    tests: tests.slice(0, told).map(({ says, remains, parameters }) => ({
      says,
      width: formatNumber(100 * remains, 2),
      after: parameters.map(({ after, unit }) => ends(after, unit)),
    })),
  };
}

/** Both ends with the digits that tell them apart. */
const ends = (interval: readonly [number, number] | undefined, unit: Unit): string =>
  interval ? estimateWords(estimate((interval[0] + interval[1]) / 2, interval, unit)).interval : "untold";

/** A network of the same curve, with the values that make it so. */
export const sameCurveWords = ({ title, path, parameters }: SameCurve): string =>
  `'${title}' (${path}) with ${parameters.map((p) => `${p.name} ${formatQuantity(p.value, p.unit, 3)}`).join(", ")} shows the same curve`;
