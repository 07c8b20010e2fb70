import {
  type ComplexLinearSolver,
  type DirectOptions,
  defaultTiny,
  measure,
  type Pattern,
  scales,
} from "./linear-solver.js";

/**
 * Complex Gaussian elimination with partial pivoting (by |re| + |im|) on all n x n entries, in buffers made once.
 * @see G.H. Golub, C.F. Van Loan, Matrix Computations, 4th ed., Johns Hopkins 2013, sec. 3.4
 */
export function denseComplexSolver(pattern: Pattern, { tiny = defaultTiny }: DirectOptions = {}): ComplexLinearSolver {
  const { size: n, start, column } = pattern;
  const fRe = new Float64Array(n * n);
  const fIm = new Float64Array(n * n);
  const rows = new Int32Array(n);
  const scale = scales(n);
  const xRe = new Float64Array(n);
  const xIm = new Float64Array(n);
  return {
    size: n,
    factor(re, im) {
      if (!measure(pattern, re, im, scale)) return false;
      fRe.fill(0);
      fIm.fill(0);
      for (let i = 0; i < n; i++) {
        rows[i] = i;
        for (let k = start[i]; k < start[i + 1]; k++) {
          fRe[i * n + column[k]] += re[k];
          fIm[i * n + column[k]] += im[k];
        }
      }
      for (let k = 0; k < n; k++) {
        let pivot = k;
        let size = -1;
        for (let i = k; i < n; i++) {
          const here = Math.abs(fRe[i * n + k]) + Math.abs(fIm[i * n + k]);
          if (here > size) [pivot, size] = [i, here];
        }
        if (!(size > tiny * Math.min(scale.row[rows[pivot]], scale.column[k]))) return false;
        if (pivot !== k) exchange(fRe, fIm, rows, n, k, pivot);
        // The inverse of the pivot takes its place.
        invert(fRe, fIm, k * n + k);
        const pRe = fRe[k * n + k];
        const pIm = fIm[k * n + k];
        for (let i = k + 1; i < n; i++) {
          const aRe = fRe[i * n + k];
          const aIm = fIm[i * n + k];
          if (aRe === 0 && aIm === 0) continue;
          const lRe = aRe * pRe - aIm * pIm;
          const lIm = aRe * pIm + aIm * pRe;
          fRe[i * n + k] = lRe;
          fIm[i * n + k] = lIm;
          for (let j = k + 1; j < n; j++) {
            const uRe = fRe[k * n + j];
            const uIm = fIm[k * n + j];
            fRe[i * n + j] -= lRe * uRe - lIm * uIm;
            fIm[i * n + j] -= lRe * uIm + lIm * uRe;
          }
        }
      }
      return true;
    },
    solve(bRe, bIm) {
      for (let i = 0; i < n; i++) {
        let sumRe = bRe[rows[i]];
        let sumIm = bIm[rows[i]];
        for (let j = 0; j < i; j++) {
          sumRe -= fRe[i * n + j] * xRe[j] - fIm[i * n + j] * xIm[j];
          sumIm -= fRe[i * n + j] * xIm[j] + fIm[i * n + j] * xRe[j];
        }
        xRe[i] = sumRe;
        xIm[i] = sumIm;
      }
      for (let i = n - 1; i >= 0; i--) {
        let sumRe = xRe[i];
        let sumIm = xIm[i];
        for (let j = i + 1; j < n; j++) {
          sumRe -= fRe[i * n + j] * xRe[j] - fIm[i * n + j] * xIm[j];
          sumIm -= fRe[i * n + j] * xIm[j] + fIm[i * n + j] * xRe[j];
        }
        const d = i * n + i;
        xRe[i] = sumRe * fRe[d] - sumIm * fIm[d];
        xIm[i] = sumRe * fIm[d] + sumIm * fRe[d];
      }
      bRe.set(xRe);
      bIm.set(xIm);
      return true;
    },
  };
}

/** 1 / z in place, without overflow on the way. R.L. Smith, Commun. ACM 5 (1962) 435. */
export function invert(re: Float64Array, im: Float64Array, at: number): void {
  const a = re[at];
  const b = im[at];
  if (Math.abs(a) >= Math.abs(b)) {
    const r = b / a;
    const d = a + b * r;
    re[at] = 1 / d;
    im[at] = -r / d;
  } else {
    const r = a / b;
    const d = a * r + b;
    re[at] = r / d;
    im[at] = -1 / d;
  }
}

function exchange(re: Float64Array, im: Float64Array, rows: Int32Array, n: number, a: number, b: number): void {
  for (const f of [re, im]) {
    for (let j = 0; j < n; j++) {
      const held = f[a * n + j];
      f[a * n + j] = f[b * n + j];
      f[b * n + j] = held;
    }
  }
  const row = rows[a];
  rows[a] = rows[b];
  rows[b] = row;
}
