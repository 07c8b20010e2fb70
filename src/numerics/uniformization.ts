import { multiply, type SparseRows, sparseRows } from "./sparse.js";

/** Carries a state through x' = A x exactly, and its time integral with it. */
export interface Propagator {
  /** Largest rate, 1/s: a step longer than `longest` is to be split. */
  readonly longest: number;
  /** Prepares a step from x of length up to h <= longest: afterwards `at` reads anywhere in it. */
  begin(x: Float64Array, h: number): void;
  /** weights . x(d) and weights . integral of x from 0 to d, for 0 <= d <= h; no allocation. */
  at(d: number, states: Int32Array, weights: Float64Array): { value: number; integral: number };
  /** x <- x(d), z <- z + integral of x from 0 to d, in place. */
  finish(d: number, x: Float64Array, z: Float64Array): void;
}

/**
 * Rate times step of one step. Long steps need fewer products with A a second, short ones fewer terms a time asked: long
 * where the products cost, short where the system is small.
 */
const thetaFor = (size: number): number => (size > 64 ? 32 : 12);
const mostTerms = 128;

/**
 * Exact stepping of x' = A x for a matrix whose off-diagonal entries are not negative (flows between volumes):
 * exp(A h) = sum of Poisson(k; L h) P^k with P = I + A/L, L the largest rate, all terms >= 0, so nothing cancels.
 * The vectors P^k x of one step serve every time in it; the integral takes the weights P(N > k)/L. Error near round-off.
 * @see A. Jensen, Skand. Aktuarietidskr. 36 (1953) 87-91; W. K. Grassmann, Comput. Oper. Res. 4 (1977) 47-53
 */
export function uniformization(a: SparseRows): Propagator {
  const n = a.size;
  // Without any rate the state grows by its sources alone; any rate will do then, as the series ends by itself.
  const rate = largestRate(a) || 1;
  const jump = jumpMatrix(a, rate);
  const powers = Array.from({ length: termsFor(thetaFor(n)) }, () => new Float64Array(n));
  const weight = new Float64Array(mostTerms);
  const tail = new Float64Array(mostTerms);
  const read = { value: 0, integral: 0 };
  let ready = 0;
  let weighed = Number.NaN;
  let terms = 0;

  function weigh(d: number): void {
    if (d === weighed) return;
    weighed = d;
    terms = poisson(rate * d, weight, tail, ready);
  }

  return {
    longest: thetaFor(n) / rate,
    begin(x, h) {
      ready = termsFor(rate * h);
      weighed = Number.NaN;
      powers[0].set(x);
      for (let k = 1; k < ready; k++) multiply(jump, powers[k - 1], powers[k]);
    },
    at(d, states, weights) {
      weigh(d);
      let value = 0;
      let integral = 0;
      for (let k = 0; k < terms; k++) {
        const v = powers[k];
        let sum = 0;
        for (let j = 0; j < states.length; j++) sum += weights[j] * v[states[j]];
        value += weight[k] * sum;
        integral += tail[k] * sum;
      }
      read.value = value;
      read.integral = integral / rate;
      return read;
    },
    finish(d, x, z) {
      weigh(d);
      x.fill(0);
      for (let k = 0; k < terms; k++) {
        const v = powers[k];
        const w = weight[k];
        const s = tail[k] / rate;
        for (let i = 0; i < n; i++) {
          x[i] += w * v[i];
          z[i] += s * v[i];
        }
      }
    },
  };
}

/** P = I + A / rate. */
function jumpMatrix(a: SparseRows, rate: number): SparseRows {
  return sparseRows(
    Array.from({ length: a.size }, (_, i) => {
      const row = new Map([[i, 1]]);
      for (let k = a.start[i]; k < a.start[i + 1]; k++) {
        row.set(a.column[k], (row.get(a.column[k]) ?? 0) + a.value[k] / rate);
      }
      return row;
    }),
  );
}

/** Largest rate at which a state empties. */
export function largestRate(a: SparseRows): number {
  let rate = 0;
  for (let i = 0; i < a.size; i++) {
    for (let k = a.start[i]; k < a.start[i + 1]; k++) if (a.column[k] === i) rate = Math.max(rate, -a.value[k]);
  }
  return rate;
}

/** Terms until both weight and tail of a Poisson number are under round-off. */
const termsFor = (theta: number): number => Math.min(mostTerms, Math.ceil(theta + 9 * Math.sqrt(theta) + 12));

/** Weights P(N = k) and tails P(N > k) for a mean theta <= 32; returns how many matter (at most `limit`). */
function poisson(theta: number, weight: Float64Array, tail: Float64Array, limit: number): number {
  const terms = Math.min(limit, termsFor(theta));
  let w = Math.exp(-theta);
  for (let k = 0; k < terms; k++) {
    weight[k] = w;
    w *= theta / (k + 1);
  }
  // Summed from the far end, so that small tails keep their digits.
  let sum = w / (1 - Math.min(0.5, theta / (terms + 1)));
  for (let k = terms - 1; k >= 0; k--) {
    tail[k] = sum;
    sum += weight[k];
  }
  return terms;
}
