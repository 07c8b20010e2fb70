import type { SparseRows } from "../numerics/sparse.js";
import { type DenseStep, denseStep } from "../numerics/squaring.js";
import type { Stepper } from "./stepper.js";

/** Stepping of a stiff system of few states: dense matrices, one per step length, kept for reuse. */
export function squaringStepper(matrix: SparseRows): Stepper {
  const n = matrix.size;
  const steps = new Map<string, DenseStep>();
  const from = new Float64Array(n);
  const stepOf = (d: number): DenseStep => {
    const key = d.toPrecision(12);
    const step = steps.get(key) ?? denseStep(matrix, d);
    steps.set(key, step);
    return step;
  };
  const row = (m: Float64Array, i: number): number => {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += m[i * n + j] * from[j];
    return sum;
  };
  return {
    longest: Number.POSITIVE_INFINITY,
    begin: (x) => from.set(x),
    look: (states, weights) => ({
      value: (d) => states.reduce((sum, s, j) => sum + weights[j] * row(stepOf(d).exponential, s), 0),
      integral: (d) => states.reduce((sum, s, j) => sum + weights[j] * row(stepOf(d).integral, s), 0),
      lagged() {
        throw new Error("a stiff system carries its lags as states");
      },
    }),
    finish(d, x, z) {
      const { exponential, integral } = stepOf(d);
      for (let i = 0; i < n; i++) {
        x[i] = row(exponential, i);
        z[i] += row(integral, i);
      }
    },
  };
}
