import { combine } from "./combine.js";

/** The polynomial of the last step: what lies between its ends, and a first guess of what comes after. */
export interface StepPolynomial {
  /** Length of the step; 0 before there is one. */
  h: number;
  /** Time and state at its start. */
  t: number;
  readonly start: Float64Array;
  /** Places of the stages in the step, and what each adds to the start. */
  readonly c: Float64Array;
  readonly z: readonly Float64Array[];
  readonly weights: Float64Array;
  take(t: number, h: number, start: Float64Array, z: readonly Float64Array[]): void;
}

export function stepPolynomial(n: number, c: Float64Array, stages: readonly Float64Array[]): StepPolynomial {
  const polynomial: StepPolynomial = {
    h: 0,
    t: 0,
    start: new Float64Array(n),
    c,
    z: stages.map(() => new Float64Array(n)),
    weights: new Float64Array(c.length),
    take(t, h, start, z) {
      polynomial.t = t;
      polynomial.h = h;
      polynomial.start.set(start);
      for (let j = 0; j < z.length; j++) polynomial.z[j].set(z[j]);
    },
  };
  return polynomial;
}

/** Value at t, also outside the step; no allocation. */
export function evaluate(p: StepPolynomial, t: number, y: Float64Array): void {
  const place = (t - p.t) / p.h;
  const { c, z, weights } = p;
  for (let j = 0; j < c.length; j++) {
    let weight = place / c[j];
    for (let m = 0; m < c.length; m++) if (m !== j) weight *= (place - c[m]) / (c[j] - c[m]);
    weights[j] = weight;
  }
  y.set(p.start);
  combine(weights, 0, z, y);
}
