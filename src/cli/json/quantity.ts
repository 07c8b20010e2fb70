import { inUnit, type Unit } from "../../units/unit.js";

/** A number with its unit; null beside the reason where there is no number. */
export interface QuantityJson {
  readonly value: number | null;
  readonly unit: string;
  readonly why?: Why;
}

export type Why = "infinite" | "undefined" | "not-estimable";

export interface SeriesJson {
  readonly unit: string;
  readonly values: readonly (number | null)[];
}

/** The unit of a pure number in JSON. */
export const unitName = (unit: Unit): string => (unit.name === "" ? "1" : unit.name);

/** An SI value in a unit. */
export function quantity(si: number | undefined, unit: Unit, missing: Why = "undefined"): QuantityJson {
  if (si === undefined) return { value: null, unit: unitName(unit), why: missing };
  return pure(inUnit(si, unit), unitName(unit));
}

/** A number that is already in its unit. */
export function pure(value: number, unit = "1"): QuantityJson {
  if (Number.isFinite(value)) return { value: value + 0, unit };
  return { value: null, unit, why: Number.isNaN(value) ? "undefined" : "infinite" };
}

/** SI values in a unit. */
export const series = (si: ArrayLike<number>, unit: Unit): SeriesJson => ({
  unit: unitName(unit),
  values: Array.from(si, (v) => finite(inUnit(v, unit))),
});

/** A number, or null where there is none. */
export const finite = (v: number): number | null => (Number.isFinite(v) ? v + 0 : null);
