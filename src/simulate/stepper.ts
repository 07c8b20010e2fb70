/** Steps a linear system and reads sums of its states anywhere inside the step begun. */
export interface Stepper {
  readonly longest: number;
  begin(x: Float64Array, h: number): void;
  /** A sum of states, to be read in the step begun; good until the next `begin`. */
  look(states: Int32Array, weights: Float64Array): Look;
  /** x <- x(d), z <- z + integral of x over the step. */
  finish(d: number, x: Float64Array, z: Float64Array): void;
}

export interface Look {
  value(d: number): number;
  /** From the beginning of the step to d. */
  integral(d: number): number;
  /** Through a first-order lag of the given rate that held nothing at the beginning of the step. */
  lagged(d: number, rate: number): number;
}
