import { bandwidth } from "./banded-lu.js";
import { invert } from "./complex-lu.js";
import {
  type ComplexLinearSolver,
  type DirectOptions,
  defaultTiny,
  measure,
  type Pattern,
  scales,
} from "./linear-solver.js";

/**
 * The complex form of `bandedSolver`: partial pivoting by |re| + |im| inside the band.
 * @see G.H. Golub, C.F. Van Loan, Matrix Computations, 4th ed., Johns Hopkins 2013, sec. 4.3
 */
export function bandedComplexSolver(pattern: Pattern, { tiny = defaultTiny }: DirectOptions = {}): ComplexLinearSolver {
  const { size: n, start, column } = pattern;
  const { below, above } = bandwidth(pattern);
  const reach = below + above;
  const width = below + reach + 1;
  const fRe = new Float64Array(n * width); // entry (i, j) at i * width + j - i + below
  const fIm = new Float64Array(n * width);
  const pivots = new Int32Array(n);
  const origin = new Int32Array(n);
  const scale = scales(n);
  return {
    size: n,
    factor(re, im) {
      if (!measure(pattern, re, im, scale)) return false;
      fRe.fill(0);
      fIm.fill(0);
      for (let i = 0; i < n; i++) {
        origin[i] = i;
        for (let k = start[i]; k < start[i + 1]; k++) {
          fRe[i * width + column[k] - i + below] += re[k];
          fIm[i * width + column[k] - i + below] += im[k];
        }
      }
      for (let k = 0; k < n; k++) {
        const last = Math.min(n - 1, k + below);
        const end = Math.min(n - 1, k + reach);
        const top = k * width - k + below;
        let pivot = k;
        let size = -1;
        for (let i = k; i <= last; i++) {
          const e = i * width + k - i + below;
          const here = Math.abs(fRe[e]) + Math.abs(fIm[e]);
          if (here > size) [pivot, size] = [i, here];
        }
        if (!(size > tiny * Math.min(scale.row[origin[pivot]], scale.column[k]))) return false;
        pivots[k] = pivot;
        if (pivot !== k) {
          const other = pivot * width - pivot + below;
          for (let j = k; j <= end; j++) {
            const heldRe = fRe[top + j];
            const heldIm = fIm[top + j];
            fRe[top + j] = fRe[other + j];
            fIm[top + j] = fIm[other + j];
            fRe[other + j] = heldRe;
            fIm[other + j] = heldIm;
          }
          const row = origin[k];
          origin[k] = origin[pivot];
          origin[pivot] = row;
        }
        invert(fRe, fIm, top + k);
        const pRe = fRe[top + k];
        const pIm = fIm[top + k];
        for (let i = k + 1; i <= last; i++) {
          const row = i * width - i + below;
          const aRe = fRe[row + k];
          const aIm = fIm[row + k];
          if (aRe === 0 && aIm === 0) continue;
          const lRe = aRe * pRe - aIm * pIm;
          const lIm = aRe * pIm + aIm * pRe;
          fRe[row + k] = lRe;
          fIm[row + k] = lIm;
          for (let j = k + 1; j <= end; j++) {
            const uRe = fRe[top + j];
            const uIm = fIm[top + j];
            fRe[row + j] -= lRe * uRe - lIm * uIm;
            fIm[row + j] -= lRe * uIm + lIm * uRe;
          }
        }
      }
      return true;
    },
    solve(bRe, bIm) {
      for (let k = 0; k < n; k++) {
        const heldRe = bRe[pivots[k]];
        const heldIm = bIm[pivots[k]];
        bRe[pivots[k]] = bRe[k];
        bIm[pivots[k]] = bIm[k];
        bRe[k] = heldRe;
        bIm[k] = heldIm;
        const last = Math.min(n - 1, k + below);
        for (let i = k + 1; i <= last; i++) {
          const e = i * width + k - i + below;
          bRe[i] -= fRe[e] * heldRe - fIm[e] * heldIm;
          bIm[i] -= fRe[e] * heldIm + fIm[e] * heldRe;
        }
      }
      for (let i = n - 1; i >= 0; i--) {
        const row = i * width - i + below;
        const end = Math.min(n - 1, i + reach);
        let sumRe = bRe[i];
        let sumIm = bIm[i];
        for (let j = i + 1; j <= end; j++) {
          sumRe -= fRe[row + j] * bRe[j] - fIm[row + j] * bIm[j];
          sumIm -= fRe[row + j] * bIm[j] + fIm[row + j] * bRe[j];
        }
        bRe[i] = sumRe * fRe[row + i] - sumIm * fIm[row + i];
        bIm[i] = sumRe * fIm[row + i] + sumIm * fRe[row + i];
      }
      return true;
    },
  };
}
