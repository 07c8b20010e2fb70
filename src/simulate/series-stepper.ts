import { lagWeights } from "../numerics/first-order-lag.js";
import type { SparseRows } from "../numerics/sparse.js";
import { uniformization } from "../numerics/uniformization.js";
import type { Stepper } from "./stepper.js";

/** Stepping by uniformization: one series of numbers per look serves all its times in a step. */
export function seriesStepper(matrix: SparseRows): Stepper {
  const p = uniformization(matrix);
  const filtered = new Float64Array(p.weight.length);
  const dot = (weights: Float64Array, series: Float64Array, terms: number): number => {
    let sum = 0;
    for (let k = 0; k < terms; k++) sum += weights[k] * series[k];
    return sum;
  };
  return {
    longest: p.longest,
    begin: p.begin,
    finish: p.finish,
    look(states, weights) {
      if (states.length === 0) return { value: () => 0, integral: () => 0, lagged: () => 0 };
      const series = p.series(states, weights);
      return {
        value: (d) => dot(p.weight, series, p.weigh(d, false)),
        integral: (d) => dot(p.tail, series, p.weigh(d, true)) / p.rate,
        lagged(d, rate) {
          const terms = p.weigh(d, false);
          lagWeights(rate, p.rate, d, p.weight, terms, filtered);
          return dot(filtered, series, terms);
        },
      };
    },
  };
}
