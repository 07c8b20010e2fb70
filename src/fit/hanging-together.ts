import { correlate } from "../numerics/autoregression.js";
import type { Autocorrelation } from "./autocorrelation.js";
import { dot } from "./basis.js";
import type { LinearTheory } from "./covariance.js";

/** Linear theory of a least-squares optimum whose residuals hang together. */
export interface HangingTogether {
  /** Of the unknowns of the linear theory, n x n row-major; NaN where not estimable. */
  readonly covariance: Float64Array;
  /** Variance of one weighted residual. */
  readonly variance: number;
  /** Degrees of freedom of that variance. */
  readonly freedom: number;
  /**
   * What hanging together makes of the variance of residuals along a change of the fitted curve, over that of independent ones:
   * v'Vv / v'v. Along a change that linear theory knows it is what widens the linear interval; where a front crosses a sample the
   * change lies in one reading, and there is nothing for it to hang together with.
   * @param change  of the weighted curve, one per row
   */
  along(change: Float64Array): number;
}

/**
 * Covariance J+ V J+' of plain least squares where the residuals have the covariance V of first-order autoregressions: the
 * values stay those of least squares, which hold whatever the residuals do, and their errors are those that such residuals
 * give. The variance counts what the fit took out of residuals that hang together; its degrees of freedom are F. E.
 * Satterthwaite's (Biometrics Bull. 2 (1946) 110-114).
 * @param basis     orthonormal columns that span those of the theory
 * @param besides   further orthonormal columns that count as known of the residuals: they are told elsewhere
 * @param freedom   of the sum of squared residuals, were they independent
 * @returns undefined where they are
 * @see G. A. F. Seber, C. J. Wild, Nonlinear Regression, Wiley 1989, section 6.2
 */
export function hangingTogether(
  { strands, effectiveForVariance }: Autocorrelation,
  theory: LinearTheory,
  basis: readonly Float64Array[],
  besides: readonly Float64Array[],
  residuals: Float64Array,
  freedom: number,
): HangingTogether | undefined {
  if (strands.length === 0) return undefined;
  const p = basis.length;
  const { n } = theory;
  const times = (q: Float64Array): Float64Array => {
    const v = Float64Array.from(q);
    for (const { rows, phi } of strands) correlate(rows, phi, q, v);
    return v;
  };
  const correlated = basis.map(times);
  const taken =
    basis.reduce((trace, q, k) => trace + dot(q, correlated[k]), 0) +
    besides.reduce((trace, q) => trace + dot(q, times(q)), 0);
  const sum = dot(residuals, residuals) - besides.reduce((known, q) => known + dot(q, residuals) ** 2, 0);
  const variance = Math.max(0, sum) / Math.max(1, freedom + p - taken);
  // J+ = B Q', column by column of Q.
  const ways = basis.map((q) => theory.respond(q));
  const covariance = new Float64Array(n * n).fill(Number.NaN);
  const between = basis.map((q) => correlated.map((v) => dot(q, v)));
  for (let i = 0; i < n; i++) {
    for (let j = 0; j < n; j++) {
      if (!theory.estimable[i] || !theory.estimable[j]) continue;
      let entry = 0;
      for (let k = 0; k < p; k++) for (let l = 0; l < p; l++) entry += ways[k][i] * between[k][l] * ways[l][j];
      covariance[i * n + j] = variance * entry;
    }
  }
  const along = (change: Float64Array): number => {
    const square = dot(change, change);
    return square > 0 ? dot(change, times(change)) / square : 1;
  };
  return { covariance, variance, freedom: Math.max(2, effectiveForVariance - p), along };
}
