import type { Nested } from "../../study/nested.js";
import { formatNumber } from "../../units/format.js";

/** Whether the data ask for what the general network has more, in a sentence. */
export function nestedWords({ special, general, f, freedom, p, atBound }: Nested): string {
  const more = freedom[0] === 1 ? "one parameter" : `${freedom[0]} parameters`;
  const says =
    p < 0.05
      ? `the data ask for the ${more} more`
      : `the data do not ask for the ${more} more: keep the simpler one unless physics says otherwise`;
  const chance = p < 1e-4 ? "p below 0.0001" : `p ${formatNumber(p, 2)}`;
  const bound = atBound ? "; the special case lies at a bound, where this test is on the careful side" : "";
  return `'${special}' is a special case of '${general}': ${says} (F ${f > 1000 ? "above 1000" : formatNumber(f, 3)} on ${freedom[0]} and ${formatNumber(freedom[1], 3)} degrees of freedom, ${chance})${bound}`;
}
