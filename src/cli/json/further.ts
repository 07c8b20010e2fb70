import type { FurtherParameter, FurtherTest } from "../../plan/further.js";
import type { SameCurve } from "../../plan/same-curve.js";
import { quantity } from "./quantity.js";

/** A further test, and what it would make of the intervals. */
export function furtherJson({ says, sort, remains, parameters }: FurtherTest): object {
  const interval = (of: FurtherParameter["now"], p: FurtherParameter): number[] | null =>
    of ? of.map((v) => quantity(v, p.unit).value as number) : null;
  return {
    test: says,
    sort,
    remains,
    parameters: Object.fromEntries(
      parameters.map((p) => [p.name, { unit: p.unit.name, now: interval(p.now, p), expected: interval(p.after, p) }]),
    ),
  };
}

export const sameCurveJson = ({ title, path, parameters, difference }: SameCurve): object => ({
  title,
  path,
  parameters: Object.fromEntries(parameters.map((p) => [p.name, quantity(p.value, p.unit)])),
  difference,
});
