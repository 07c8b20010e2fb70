/** How much of the variance of a function goes with one input, or with a group of inputs that stand for one. */
export interface Indices {
  /** By itself: variance of the mean at a known input, over the whole variance; a little below 0 by chance. */
  readonly first: number;
  /** With all in which it takes part. */
  readonly total: number;
  /** One standard error of `first` from the scatter of its terms. */
  readonly error: number;
}

/**
 * First-order and total indices by pick-freeze: two independent samples A and B of all inputs, and A with this input from B.
 * Inputs that depend on each other must be one group.
 * @param a     f at every row of A
 * @param b     f at every row of B
 * @param mixed f at every row of A whose input is taken from B
 * @returns     undefined where fewer than two rows are whole (a row with a number that is not finite is passed over), or nothing varies
 * @see A. Saltelli, P. Annoni, I. Azzini, F. Campolongo, M. Ratto, S. Tarantola, Comput. Phys. Commun. 181 (2010) 259-270,
 *      table 2 (b) for the first and (f), by M. J. W. Jansen, Comput. Phys. Commun. 117 (1999) 35-43, for the total index
 */
export function sobolIndices(
  a: ArrayLike<number>,
  b: ArrayLike<number>,
  mixed: ArrayLike<number>,
): Indices | undefined {
  const rows: number[] = [];
  for (let j = 0; j < a.length; j++) if (Number.isFinite(a[j] + b[j] + mixed[j])) rows.push(j);
  const n = rows.length;
  if (n < 2) return undefined;
  const mean = rows.reduce((s, j) => s + a[j] + b[j], 0) / (2 * n);
  const variance = rows.reduce((s, j) => s + (a[j] - mean) ** 2 + (b[j] - mean) ** 2, 0) / (2 * n);
  if (!(variance > 0)) return undefined;
  const terms = rows.map((j) => ((b[j] - mean) * (mixed[j] - a[j])) / variance);
  const first = terms.reduce((s, t) => s + t, 0) / n;
  const scatter = terms.reduce((s, t) => s + (t - first) ** 2, 0) / (n - 1);
  const total = rows.reduce((s, j) => s + (a[j] - mixed[j]) ** 2, 0) / (2 * n * variance);
  return { first, total, error: Math.sqrt(scatter / n) };
}
