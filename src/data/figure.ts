import type { Unit } from "../units/unit.js";

/** A number of a result: SI value, the unit people see, one standard error (SI) where it is known; or why there is none. */
export type Figure =
  | { readonly value: number; readonly unit: Unit; readonly standardError?: number }
  | { readonly value: undefined; readonly unit: Unit; readonly why: "infinite" | "undefined" | "not-estimable" };

/** A figure; a number that is not finite becomes a reason. */
export function figure(value: number | undefined, unit: Unit, standardError?: number): Figure {
  if (value === undefined) return { value, unit, why: "not-estimable" };
  if (Number.isNaN(value)) return { value: undefined, unit, why: "undefined" };
  if (!Number.isFinite(value)) return { value: undefined, unit, why: "infinite" };
  return standardError === undefined || !Number.isFinite(standardError)
    ? { value, unit }
    : { value, unit, standardError };
}

/** A quantity as someone knows it: SI, and one standard deviation where stated. */
export interface Known {
  readonly value: number;
  readonly sd?: number | undefined;
}
