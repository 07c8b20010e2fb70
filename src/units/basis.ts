import { type Dimension, dimensions, isRatio, over, sameDimension } from "./dimension.js";

/** What a network counts its contents in: hold-ups as volumes and flows as volumes per time, or both by mass. */
export type Basis = "volume" | "mass";

/** A dimension as a basis has it: by mass a volume is a mass, a flow a mass rate, a concentration a mass fraction or per mass. */
export function inBasis(dimension: Dimension, basis: Basis): Dimension {
  const volumes = dimension[0] / 3;
  if (basis === "volume" || !Number.isInteger(volumes)) return dimension;
  const [, mass, ...rest] = dimension;
  return [0, mass + volumes, ...rest] as unknown as Dimension;
}

/** The basis of a flow, by its dimension. */
export const basisOfFlow = (flow: Dimension): Basis =>
  sameDimension(flow, dimensions["mass rate"]) ? "mass" : "volume";

/**
 * Is it a concentration, as a rate of dosing is not? Per volume, per mass, a share (5 %, 20 ppm), or what a detector shows
 * of one; whichever the basis, for shares of a volume are as common as those of a mass.
 */
export const isLevel = (dimension: Dimension): boolean =>
  dimension[0] === -3 ||
  isRatio(dimension) ||
  (dimension[0] === 0 && dimension[1] === -1) ||
  sameDimension(dimension, dimensions.signal);

/** What an amount makes of a hold-up, and what a dosing rate makes of a flow. */
export const concentrationOf = (amount: Dimension, basis: Basis): Dimension =>
  over(amount, inBasis(dimensions.volume, basis));
export const dosedInto = (rate: Dimension, basis: Basis): Dimension => over(rate, inBasis(dimensions.flow, basis));

/** What people call what a body holds. */
export const holdUp = (basis: Basis): string => (basis === "mass" ? "hold-up" : "volume");
