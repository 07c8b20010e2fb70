import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { formatQuantity } from "../units/format.js";
import { one } from "../units/unit.js";

/** True where a value is not there, is unknown or has the right sign; reports where it has not. `zero`: is 0 allowed? */
export function aboveZero(what: string, value: Value | undefined, zero: boolean, report: Report): boolean {
  if (!value || value.unknown) return true;
  const x = value.of([]);
  if (zero ? x >= 0 : x > 0) return true;
  report("below-zero", value.at, { what, value: formatQuantity(x, value.unit ?? one), zero });
  return false;
}
