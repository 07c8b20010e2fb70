import type { Algebra } from "./algebra.js";

/** A power series cut off: coefficient k belongs to the k-th power. */
export type Taylor = Float64Array;

/**
 * Power series of so many coefficients as an algebra: every operation by its recurrence, no difference quotient.
 * @see A. Griewank, A. Walther, Evaluating Derivatives, 2nd ed., SIAM 2008, ch. 13
 */
export function taylor(coefficients: number): Algebra<Taylor> {
  const series = (of: (k: number, made: Taylor) => number): Taylor => {
    const made = new Float64Array(coefficients);
    for (let k = 0; k < coefficients; k++) made[k] = of(k, made);
    return made;
  };
  return {
    of: (x) => series((k) => (k === 0 ? x : 0)),
    add: (a, b) => a.map((x, k) => x + b[k]),
    subtract: (a, b) => a.map((x, k) => x - b[k]),
    multiply: (a, b) => series((k) => sum(0, k, (j) => a[j] * b[k - j])),
    divide: (a, b) => series((k, q) => (a[k] - sum(1, k, (j) => b[j] * q[k - j])) / b[0]),
    scale: (a, factor) => a.map((x) => x * factor),
    exp: (a) => series((k, e) => (k === 0 ? Math.exp(a[0]) : sum(1, k, (j) => j * a[j] * e[k - j]) / k)),
    sqrt: (a) =>
      series((k, r) => (k === 0 ? Math.sqrt(a[0]) : (a[k] - sum(1, k - 1, (j) => r[j] * r[k - j])) / (2 * r[0]))),
    log1p: (a) =>
      series((k, l) =>
        k === 0 ? Math.log1p(a[0]) : (a[k] - sum(1, k - 1, (j) => j * l[j] * a[k - j]) / k) / (1 + a[0]),
      ),
    size: (a) => Math.abs(a[0]),
  };
}

/** The variable itself, at 0: 0 + 1 x. */
export const variable = (coefficients: number): Taylor =>
  Float64Array.from({ length: coefficients }, (_, k) => (k === 1 ? 1 : 0));

/** Sum of term(j) for first <= j <= last. */
function sum(first: number, last: number, term: (j: number) => number): number {
  let total = 0;
  for (let j = first; j <= last; j++) total += term(j);
  return total;
}
