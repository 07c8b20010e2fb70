import { factorColumns, solveLeastSquares } from "./qr.js";

/** How the variance of a sample goes with groups of inputs, by regression. */
export interface AdditiveShares {
  /** Per group, 0 to 1; they add up to at most 1. */
  readonly shares: readonly number[];
  /** Share of the variance that the regression explains, for the number of its terms (R2 adjusted). What is missing is bends and joint effects. */
  readonly explained: number;
}

/**
 * Shares by least squares on a parabola in every input, which is the first-order index where what the function does is a sum
 * over the groups. The covariance of a group's part with the function is its share (J. W. Pratt's measure), so that the shares add up to R2.
 * @param groups columns of inputs, group by group; inputs of different groups are independent
 * @param y      the function at each row
 * @returns      undefined where there are too few rows for so many inputs, or nothing varies
 * @see A. Saltelli et al., Global Sensitivity Analysis: The Primer, Wiley (2008), section 1.2.5 (regression on the sample)
 */
export function additiveShares(
  groups: readonly (readonly ArrayLike<number>[])[],
  y: ArrayLike<number>,
): AdditiveShares | undefined {
  const n = y.length;
  const inputs = groups.flatMap((columns, group) => columns.map((x) => ({ group, x: standard(x) })));
  const moving = inputs.filter(({ x }) => x !== undefined) as { group: number; x: Float64Array }[];
  const bends = n >= 4 * (2 * moving.length + 1);
  const terms = moving.flatMap(({ group, x }) => [
    { group, x },
    ...(bends ? [{ group, x: centred(x.map((v) => v * v)) }] : []),
  ]);
  const goal = centred(Float64Array.from(y));
  const sum = dot(goal, goal);
  if (n < 4 * (terms.length + 1) || !(sum > 0)) return undefined;
  const matrix = new Float64Array(n * terms.length);
  terms.forEach(({ x }, j) => {
    matrix.set(x, j * n);
  });
  const coefficients =
    terms.length === 0 ? new Float64Array(0) : solveLeastSquares(factorColumns(matrix, n, terms.length), goal);
  const shares = groups.map(() => 0);
  terms.forEach(({ group, x }, j) => {
    shares[group] += (coefficients[j] * dot(x, goal)) / sum;
  });
  const whole = shares.reduce((s, v) => s + v, 0);
  const explained = 1 - ((1 - whole) * (n - 1)) / (n - terms.length - 1);
  return { shares: shares.map((s) => Math.max(0, s)), explained };
}

/** Mean 0, standard deviation 1; undefined where nothing varies. */
function standard(x: ArrayLike<number>): Float64Array | undefined {
  const c = centred(Float64Array.from(x));
  const size = Math.sqrt(dot(c, c) / c.length);
  const most = c.reduce((m, _, i) => Math.max(m, Math.abs(x[i])), 0);
  return size > 1e-12 * most ? c.map((v) => v / size) : undefined;
}

function centred(x: Float64Array): Float64Array {
  const mean = x.reduce((s, v) => s + v, 0) / x.length;
  return x.map((v) => v - mean);
}

const dot = (a: Float64Array, b: Float64Array): number => a.reduce((s, v, i) => s + v * b[i], 0);
