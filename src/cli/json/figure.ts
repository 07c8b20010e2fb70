import type { Figure } from "../../data/figure.js";
import { differenceInUnit } from "../../units/unit.js";
import { finite, type QuantityJson, quantity, unitName } from "./quantity.js";

/** A figure with its standard error in the same unit. */
export function figureJson(f: Figure): QuantityJson & { standardError?: number | null } {
  if (f.value === undefined) return { value: null, unit: unitName(f.unit), why: f.why };
  const error =
    f.standardError === undefined ? {} : { standardError: finite(differenceInUnit(f.standardError, f.unit)) };
  return { ...quantity(f.value, f.unit), ...error };
}
