import { type Dimension, dimensions } from "./dimension.js";

/** A unit as an engineer wrote it. value in SI = number * factor + offset; offset is 0 but for degC and degF. */
export interface Unit {
  readonly name: string;
  readonly factor: number;
  readonly offset: number;
  readonly dimension: Dimension;
}

/** The unit of a bare number; it prints as nothing. */
export const one: Unit = { name: "", factor: 1, offset: 0, dimension: dimensions.ratio };

/** A detector's own unit, under any word: for readings whose scale is free. Never made from an unknown word unasked. */
export const signalUnit = (name: string): Unit => ({ name, factor: 1, offset: 0, dimension: dimensions.signal });

/** A number in a unit, as SI. */
export const fromUnit = (x: number, unit: Unit): number => x * unit.factor + unit.offset;

/** An SI value, as a number in a unit. */
export const inUnit = (si: number, unit: Unit): number => (si - unit.offset) / unit.factor;

/** An SI difference, as a number in a unit. */
export const differenceInUnit = (si: number, unit: Unit): number => si / unit.factor;
