import {
  type DirectOptions,
  defaultTiny,
  finite,
  type LinearSolver,
  measure,
  type Pattern,
  scales,
} from "./linear-solver.js";
import { minimumDegree } from "./ordering.js";
import { choosePivots, enough, type Pivots } from "./sparse-lu-pivots.js";

/** A pivot under this part of what stands below it is no longer trusted: pivots are chosen anew. */
export const stale = 1e-3;

/**
 * Sparse elimination by columns. Pivots are chosen for the first matrix and kept while they are stable, which makes the
 * factors of later matrices a plain pass over known places.
 * @see T.A. Davis, E. Palamadai Natarajan, ACM Trans. Math. Softw. 37 (2010) 36 (the same division of labour)
 */
export function sparseSolver(
  pattern: Pattern,
  { tiny = defaultTiny, onDiagonal = false, order = minimumDegree(pattern) }: DirectOptions = {},
): LinearSolver {
  const n = pattern.size;
  const scale = scales(n);
  const x = new Float64Array(n);
  const diagonal = new Float64Array(n);
  const lasting = onDiagonal ? 0 : stale;
  let pivots: Pivots | undefined;
  let factors = { l: new Float64Array(0), u: new Float64Array(0) };

  /** False where the pivots of an earlier matrix do not suit this one. */
  const refactor = (value: Float64Array, p: Pivots): boolean => {
    const { start, source, target, lStart, lRow, uStart, uRow } = p;
    const { l, u } = factors;
    for (let k = 0; k < n; k++) {
      for (let e = start[k]; e < start[k + 1]; e++) x[target[e]] += value[source[e]];
      for (let e = uStart[k]; e < uStart[k + 1]; e++) {
        const j = uRow[e];
        const above = x[j];
        x[j] = 0;
        u[e] = above;
        if (above === 0) continue;
        for (let m = lStart[j]; m < lStart[j + 1]; m++) x[lRow[m]] -= l[m] * above;
      }
      const pivot = x[k];
      x[k] = 0;
      let largest = 0;
      for (let m = lStart[k]; m < lStart[k + 1]; m++) {
        const here = x[lRow[m]];
        x[lRow[m]] = 0;
        if (Math.abs(here) > largest) largest = Math.abs(here);
        l[m] = here / pivot;
      }
      const size = Math.abs(pivot);
      const solid = size > tiny * Math.min(scale.row[p.row[k]], scale.column[p.column[k]]);
      if (!(size >= lasting * largest) || !solid || size === Number.POSITIVE_INFINITY) {
        x.fill(0);
        return false;
      }
      diagonal[k] = pivot;
    }
    return true;
  };

  return {
    size: n,
    factor(value) {
      if (!(tiny > 0 ? measure(pattern, value, undefined, scale) : finite(value))) return false;
      if (pivots && refactor(value, pivots)) return true;
      pivots = choosePivots(pattern, order, value, undefined, scale, tiny, onDiagonal ? 0 : enough);
      if (!pivots) return false;
      factors = { l: new Float64Array(pivots.lRow.length), u: new Float64Array(pivots.uRow.length) };
      return refactor(value, pivots);
    },
    solve(b) {
      if (!pivots) return false;
      const { column, place, lStart, lRow, uStart, uRow } = pivots;
      const { l, u } = factors;
      for (let i = 0; i < n; i++) x[place[i]] = b[i];
      for (let k = 0; k < n; k++) {
        const known = x[k];
        if (known === 0) continue;
        for (let m = lStart[k]; m < lStart[k + 1]; m++) x[lRow[m]] -= l[m] * known;
      }
      for (let k = n - 1; k >= 0; k--) {
        const known = x[k] / diagonal[k];
        b[column[k]] = known;
        x[k] = 0;
        if (known === 0) continue;
        for (let e = uStart[k]; e < uStart[k + 1]; e++) x[uRow[e]] -= u[e] * known;
      }
      return true;
    },
  };
}
