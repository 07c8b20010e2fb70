import { multiply, type SparseRows, sparseRows } from "./sparse.js";

/**
 * Carries a state through x' = A x exactly. One step from x is a series of vectors P^k x; every time d inside the step is
 * read from it with Poisson weights, its time integral with Poisson tails.
 */
export interface Propagator {
  /** L, the largest rate, 1/s. */
  readonly rate: number;
  /** A step may be this long, s. */
  readonly longest: number;
  /** Prepares a step from x of length up to h <= longest. */
  begin(x: Float64Array, h: number): void;
  /** The numbers weights . P^k x of the step begun, k = 0, 1, ... */
  series(states: Int32Array, weights: Float64Array): Float64Array;
  /** Fills `weight` (and `tail` where asked) for time d; returns how many terms count. */
  weigh(d: number, tails: boolean): number;
  readonly weight: Float64Array;
  /** P(N > k); divide by `rate` for the integral from 0 to d. */
  readonly tail: Float64Array;
  /** x <- x(d), z <- z + integral of x from 0 to d, in place. */
  finish(d: number, x: Float64Array, z: Float64Array): void;
}

/**
 * Rate times step of one step. Long steps need fewer products with A a second, short ones fewer terms a time asked: long
 * where the products cost, short where the system is small.
 */
const thetaFor = (size: number): number => (size > 64 ? 32 : 12);

/**
 * Exact stepping of x' = A x for a matrix whose off-diagonal entries are not negative (flows between volumes):
 * exp(A h) = sum of Poisson(k; L h) P^k with P = I + A/L, L the largest rate, all terms >= 0, so nothing cancels.
 * Error near round-off; nothing is allocated in a step but by `series`.
 * @see A. Jensen, Skand. Aktuarietidskr. 36 (1953) 87-91; W. K. Grassmann, Comput. Oper. Res. 4 (1977) 47-53
 */
export function uniformization(a: SparseRows): Propagator {
  const n = a.size;
  // Without any rate the state grows by its sources alone; any rate will do then, as the series ends by itself.
  const rate = largestRate(a) || 1;
  const theta = thetaFor(n);
  const jump = jumpMatrix(a, rate);
  const powers = Array.from({ length: termsFor(theta) }, () => new Float64Array(n));
  const weight = new Float64Array(powers.length);
  const tail = new Float64Array(powers.length);
  let ready = 0;

  const weigh = (d: number, tails: boolean): number => {
    const terms = Math.min(ready, termsFor(rate * d));
    poissonWeights(rate * d, weight, terms);
    if (tails) poissonTails(rate * d, weight, tail, terms);
    return terms;
  };
  return {
    rate,
    longest: theta / rate,
    weight,
    tail,
    weigh,
    begin(x, h) {
      ready = Math.min(powers.length, termsFor(rate * h));
      powers[0].set(x);
      for (let k = 1; k < ready; k++) multiply(jump, powers[k - 1], powers[k]);
    },
    series(states, weights) {
      const s = new Float64Array(ready);
      for (let k = 0; k < ready; k++) {
        const v = powers[k];
        for (let j = 0; j < states.length; j++) s[k] += weights[j] * v[states[j]];
      }
      return s;
    },
    finish(d, x, z) {
      const terms = weigh(d, true);
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
const termsFor = (theta: number): number => Math.ceil(theta + 9 * Math.sqrt(theta) + 12);

function poissonWeights(theta: number, weight: Float64Array, terms: number): void {
  let w = Math.exp(-theta);
  for (let k = 0; k < terms; k++) {
    weight[k] = w;
    w *= theta / (k + 1);
  }
}

/** P(N > k), summed from the far end, so that small tails keep their digits. */
function poissonTails(theta: number, weight: Float64Array, tail: Float64Array, terms: number): void {
  const next = (weight[terms - 1] * theta) / terms;
  let sum = next / (1 - Math.min(0.5, theta / (terms + 1)));
  for (let k = terms - 1; k >= 0; k--) {
    tail[k] = sum;
    sum += weight[k];
  }
}
