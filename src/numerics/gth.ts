/** Factors of a balance: solves for many right-hand sides. */
export interface GthFactors {
  /** b becomes x, in place. Length n. */
  solve(b: Float64Array): void;
}

/**
 * Solves (excess_i + sum_j a_ij) x_i - sum_j a_ij x_j = b_i: a balance in which node i gets the parts a_ij from others and
 * the part excess_i from outside. Pivots are sums, never differences, so that every entry of x is right to round-off for
 * a b of one sign, however often what flows goes round. n^3/3 operations.
 * @param a n x n, row-major, not negative; the diagonal is not looked at; becomes the factors
 * @param excess length n, not negative; overwritten
 * @returns "singular" where nothing comes from outside
 * @see W.K. Grassmann, M.I. Taksar, D.P. Heyman, Oper. Res. 33 (1985) 1107-1116; A.S. Alfa, J. Xue, Q. Ye, Math. Comp. 71
 *      (2002) 217-236 (from memory)
 */
export function gth(a: Float64Array, excess: Float64Array): GthFactors | "singular" {
  const n = excess.length;
  for (let k = n - 1; k >= 0; k--) {
    const row = k * n;
    let pivot = excess[k];
    for (let j = 0; j < k; j++) pivot += a[row + j];
    if (!(pivot > 0) || !Number.isFinite(pivot)) return "singular";
    a[row + k] = 1 / pivot;
    for (let i = 0; i < k; i++) {
      const part = a[i * n + k] / pivot;
      a[i * n + k] = part;
      if (part === 0) continue;
      excess[i] += part * excess[k];
      for (let j = 0; j < k; j++) if (j !== i) a[i * n + j] += part * a[row + j];
    }
  }
  return {
    solve(b) {
      for (let k = n - 1; k > 0; k--) for (let i = 0; i < k; i++) b[i] += a[i * n + k] * b[k];
      for (let k = 0; k < n; k++) {
        for (let j = 0; j < k; j++) b[k] += a[k * n + j] * b[j];
        b[k] *= a[k * n + k];
      }
    },
  };
}
