import type { Preconditioner } from "./ilu.js";
import type { Vectors } from "./vectors.js";

/** A system that is known only by what its matrix does to a vector. */
export interface IterativeProblem {
  readonly size: number;
  /** y = A x; neither allocates nor changes x. */
  readonly multiply: (x: Float64Array, y: Float64Array) => void;
  readonly preconditioner?: Pick<Preconditioner, "apply">;
  /** Where its vectors are to lie; those of the caller, too. Default: plain arrays. */
  readonly vectors?: Vectors;
}

export interface IterativeGoal {
  /** Wanted |b - A x| / |b|, Euclidean norms. */
  readonly relative: number;
  /** Products with A after which it gives up. */
  readonly most: number;
  /** x is zero, and the residual that the method itself keeps is believed: two products less, for rough solves. */
  readonly rough?: boolean;
}

export interface Iterated {
  readonly reached: boolean;
  /** |b - A x| / |b|, of the true residual but for rough solves. */
  readonly residual: number;
  /** Products with A. */
  readonly products: number;
}

/** An iterative method with its vectors made once: improves x until A x = b; neither allocates per iteration. */
export type IterativeMethod = (b: Float64Array, x: Float64Array, goal: IterativeGoal) => Iterated;

export const norm = (x: Float64Array): number => Math.sqrt(dot(x, x));

export function dot(x: Float64Array, y: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < x.length; i++) sum += x[i] * y[i];
  return sum;
}
