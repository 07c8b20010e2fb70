import type { Pattern } from "./linear-solver.js";

/** Something near the inverse of a matrix, cheap to apply. */
export interface Preconditioner {
  /** Takes the entries of the matrix. @returns false where it cannot be made: apply then does nothing */
  take(value: Float64Array): boolean;
  /** x becomes M^-1 x. No allocation. */
  apply(x: Float64Array): void;
}

/**
 * Incomplete LU with no entries beyond those of A, in the given row order: exact for chains of flow in order, close for the
 * M-matrices of upwind balances (which never meet a zero pivot).
 * @param kept the part of what falls outside the pattern that is added to the diagonal instead: near 1, smooth answers come out
 *   nearly right at once, which halves the iterations of large balances (I. Gustafsson, BIT 18 (1978) 142-156)
 * @see J.A. Meijerink, H.A. van der Vorst, Math. Comp. 31 (1977) 148-162; Y. Saad, Iterative Methods for Sparse Linear
 *      Systems, 2nd ed., SIAM 2003, sec. 10.3
 */
export function incompleteLu({ size: n, start, column }: Pattern, kept = 0): Preconditioner {
  const f = new Float64Array(column.length); // unit lower and upper factor, the diagonal of the upper one inverted
  const diagonal = new Int32Array(n).fill(-1);
  for (let i = 0; i < n; i++) for (let k = start[i]; k < start[i + 1]; k++) if (column[k] === i) diagonal[i] = k;
  const where = new Int32Array(n).fill(-1);
  let good = false;
  return {
    take(value) {
      f.set(value);
      good = diagonal.every((k) => k >= 0);
      for (let i = 0; good && i < n; i++) {
        const end = start[i + 1];
        for (let k = start[i]; k < end; k++) where[column[k]] = k;
        for (let k = start[i]; k < diagonal[i]; k++) {
          const j = column[k];
          const l = f[k] * f[diagonal[j]];
          f[k] = l;
          for (let m = diagonal[j] + 1; m < start[j + 1]; m++) {
            const at = where[column[m]];
            if (at >= 0) f[at] -= l * f[m];
            else f[diagonal[i]] -= kept * l * f[m];
          }
        }
        for (let k = start[i]; k < end; k++) where[column[k]] = -1;
        const pivot = Math.abs(f[diagonal[i]]);
        good = pivot > 0 && pivot < Number.POSITIVE_INFINITY;
        f[diagonal[i]] = 1 / f[diagonal[i]];
      }
      return good;
    },
    apply(x) {
      if (!good) return;
      for (let i = 0; i < n; i++) {
        let sum = x[i];
        for (let k = start[i]; k < diagonal[i]; k++) sum -= f[k] * x[column[k]];
        x[i] = sum;
      }
      for (let i = n - 1; i >= 0; i--) {
        let sum = x[i];
        for (let k = diagonal[i] + 1; k < start[i + 1]; k++) sum -= f[k] * x[column[k]];
        x[i] = sum * f[diagonal[i]];
      }
    },
  };
}
