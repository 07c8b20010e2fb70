import {
  type ComplexLinearSolver,
  type DirectOptions,
  defaultTiny,
  finite,
  measure,
  type Pattern,
  scales,
} from "./linear-solver.js";
import { minimumDegree } from "./ordering.js";
import { stale } from "./sparse-lu.js";
import { choosePivots, enough, type Pivots } from "./sparse-lu-pivots.js";

/** The complex form of `sparseSolver`; sizes are |re| + |im|. */
export function sparseComplexSolver(
  pattern: Pattern,
  { tiny = defaultTiny, onDiagonal = false, order = minimumDegree(pattern) }: DirectOptions = {},
): ComplexLinearSolver {
  const n = pattern.size;
  const scale = scales(n);
  const xRe = new Float64Array(n);
  const xIm = new Float64Array(n);
  const inverseRe = new Float64Array(n); // of the pivots
  const inverseIm = new Float64Array(n);
  const lasting = onDiagonal ? 0 : stale;
  let pivots: Pivots | undefined;
  let factors = room(0, 0);

  /** False where the pivots of an earlier matrix do not suit this one. */
  const refactor = (re: Float64Array, im: Float64Array, p: Pivots): boolean => {
    const { start, source, target, lStart, lRow, uStart, uRow } = p;
    const { lRe, lIm, uRe, uIm } = factors;
    for (let k = 0; k < n; k++) {
      for (let e = start[k]; e < start[k + 1]; e++) {
        xRe[target[e]] += re[source[e]];
        xIm[target[e]] += im[source[e]];
      }
      for (let e = uStart[k]; e < uStart[k + 1]; e++) {
        const j = uRow[e];
        const aRe = xRe[j];
        const aIm = xIm[j];
        xRe[j] = 0;
        xIm[j] = 0;
        uRe[e] = aRe;
        uIm[e] = aIm;
        if (aRe === 0 && aIm === 0) continue;
        for (let m = lStart[j]; m < lStart[j + 1]; m++) {
          const i = lRow[m];
          xRe[i] -= lRe[m] * aRe - lIm[m] * aIm;
          xIm[i] -= lRe[m] * aIm + lIm[m] * aRe;
        }
      }
      const size = Math.abs(xRe[k]) + Math.abs(xIm[k]);
      const square = xRe[k] * xRe[k] + xIm[k] * xIm[k];
      const pRe = xRe[k] / square;
      const pIm = -xIm[k] / square;
      xRe[k] = 0;
      xIm[k] = 0;
      let largest = 0;
      for (let m = lStart[k]; m < lStart[k + 1]; m++) {
        const i = lRow[m];
        const aRe = xRe[i];
        const aIm = xIm[i];
        xRe[i] = 0;
        xIm[i] = 0;
        const here = Math.abs(aRe) + Math.abs(aIm);
        if (here > largest) largest = here;
        lRe[m] = aRe * pRe - aIm * pIm;
        lIm[m] = aRe * pIm + aIm * pRe;
      }
      const solid = size > tiny * Math.min(scale.row[p.row[k]], scale.column[p.column[k]]);
      if (!(size >= lasting * largest) || !solid || !(square > 0 && square < Number.POSITIVE_INFINITY)) {
        xRe.fill(0);
        xIm.fill(0);
        return false;
      }
      inverseRe[k] = pRe;
      inverseIm[k] = pIm;
    }
    return true;
  };

  return {
    size: n,
    factor(re, im) {
      if (!(tiny > 0 ? measure(pattern, re, im, scale) : finite(re, im))) return false;
      if (pivots && refactor(re, im, pivots)) return true;
      pivots = choosePivots(pattern, order, re, im, scale, tiny, onDiagonal ? 0 : enough);
      if (!pivots) return false;
      factors = room(pivots.lRow.length, pivots.uRow.length);
      return refactor(re, im, pivots);
    },
    solve(bRe, bIm) {
      if (!pivots) return false;
      const { column, place, lStart, lRow, uStart, uRow } = pivots;
      const { lRe, lIm, uRe, uIm } = factors;
      for (let i = 0; i < n; i++) {
        xRe[place[i]] = bRe[i];
        xIm[place[i]] = bIm[i];
      }
      for (let k = 0; k < n; k++) {
        const re = xRe[k];
        const im = xIm[k];
        if (re === 0 && im === 0) continue;
        for (let m = lStart[k]; m < lStart[k + 1]; m++) {
          xRe[lRow[m]] -= lRe[m] * re - lIm[m] * im;
          xIm[lRow[m]] -= lRe[m] * im + lIm[m] * re;
        }
      }
      for (let k = n - 1; k >= 0; k--) {
        const re = xRe[k] * inverseRe[k] - xIm[k] * inverseIm[k];
        const im = xRe[k] * inverseIm[k] + xIm[k] * inverseRe[k];
        bRe[column[k]] = re;
        bIm[column[k]] = im;
        xRe[k] = 0;
        xIm[k] = 0;
        for (let e = uStart[k]; e < uStart[k + 1]; e++) {
          xRe[uRow[e]] -= uRe[e] * re - uIm[e] * im;
          xIm[uRow[e]] -= uRe[e] * im + uIm[e] * re;
        }
      }
      return true;
    },
  };
}

/** Entries of the factors: L below its unit diagonal, U above its diagonal. */
const room = (lower: number, upper: number) => ({
  lRe: new Float64Array(lower),
  lIm: new Float64Array(lower),
  uRe: new Float64Array(upper),
  uIm: new Float64Array(upper),
});
