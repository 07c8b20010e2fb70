import { describeDimension, exampleFor } from "../units/describe.js";
import { type Dimension, sameDimension } from "../units/dimension.js";

/** What a key takes: one dimension, one of several, or any. */
export type Wanted = Dimension | readonly Dimension[] | "any";

/** True where a dimension is among those wanted. */
export const fits = (wanted: Wanted, d: Dimension): boolean =>
  wanted === "any" || listed(wanted).some((w) => sameDimension(w, d));

/** "a volume (like 150 L) or a flow (volume per time, like 10 L/min)". */
export const describeWanted = (wanted: Wanted): string =>
  wanted === "any" ? "a value" : listed(wanted).map(describeDimension).join(" or ");

/** One value that would be right. */
export const exampleOf = (wanted: Wanted): string => (wanted === "any" ? "10 L/min" : exampleFor(listed(wanted)[0]));

const isOne = (wanted: Dimension | readonly Dimension[]): wanted is Dimension => typeof wanted[0] === "number";

const listed = (wanted: Dimension | readonly Dimension[]): readonly Dimension[] => (isOne(wanted) ? [wanted] : wanted);
