import { formatNumber } from "../../units/format.js";
import { differenceInUnit, inUnit, type Unit } from "../../units/unit.js";

/** Significant digits that a value deserves beside its standard error: down to the error's second digit. */
export function digitsFor(value: number, error: number | undefined): number {
  if (error === undefined || !(error > 0) || !Number.isFinite(error) || value === 0) return 4;
  const digits = Math.floor(Math.log10(Math.abs(value))) - Math.floor(Math.log10(error)) + 2;
  return Math.min(12, Math.max(2, digits));
}

/** An SI value in its unit without the unit's name, with as many digits as its standard error (SI) supports. */
export function supported(si: number, unit: Unit, error: number | undefined): string {
  const value = inUnit(si, unit);
  return formatNumber(value, digitsFor(value, error === undefined ? undefined : differenceInUnit(error, unit)));
}

/** A standard error in a unit, two digits. */
export const errorText = (si: number | undefined, unit: Unit): string =>
  si === undefined ? "" : formatNumber(differenceInUnit(si, unit), 2);
