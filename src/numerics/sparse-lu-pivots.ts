import type { Pattern, Scales } from "./linear-solver.js";

/**
 * Which pivots to take, and where L and U have entries for them; rows and columns are numbered in the order of elimination.
 * Good for every matrix of the pattern on which these pivots are stable.
 */
export interface Pivots {
  /** Column k of the factors is column `column[k]` of A. */
  readonly column: Int32Array;
  /** Row i of A is row `place[i]` of the factors. */
  readonly place: Int32Array;
  /** Row k of the factors is row `row[k]` of A. */
  readonly row: Int32Array;
  /** Column k of L below its unit diagonal: rows lRow[lStart[k] .. lStart[k + 1]). */
  readonly lStart: Int32Array;
  readonly lRow: Int32Array;
  /** Column k of U above its diagonal, ascending. */
  readonly uStart: Int32Array;
  readonly uRow: Int32Array;
  /** Column k of the permuted A: entry `source[e]` of the values goes to row `target[e]`. */
  readonly start: Int32Array;
  readonly source: Int32Array;
  readonly target: Int32Array;
}

/** The diagonal is taken where it is at least this part of the largest candidate: it keeps the fill low. */
export const enough = 0.1;

/**
 * Left-looking elimination with partial pivoting, in the given order of columns; the entries of each column are found by
 * depth-first search, so that the work is in proportion to the arithmetic. Real where `im` is left out.
 * @returns undefined where the matrix is singular
 * @see J.R. Gilbert, T. Peierls, SIAM J. Sci. Stat. Comput. 9 (1988) 862-874; T.A. Davis, Direct Methods for Sparse Linear
 *      Systems, SIAM 2006, sec. 6.2
 */
export function choosePivots(
  pattern: Pattern,
  order: Int32Array,
  re: Float64Array,
  im: Float64Array | undefined,
  scale: Scales,
  tiny: number,
  diagonalEnough: number,
): Pivots | undefined {
  const n = pattern.size;
  const columns = byColumns(pattern, order);
  const place = new Int32Array(n).fill(-1);
  const row = new Int32Array(n);
  const xRe = new Float64Array(n);
  const xIm = new Float64Array(n);
  const lStart = new Int32Array(n + 1);
  const uStart = new Int32Array(n + 1);
  const lRow: number[] = [];
  const uRow: number[] = [];
  const lRe: number[] = [];
  const lIm: number[] = [];
  const search = reach(n, place, lStart, lRow);
  for (let k = 0; k < n; k++) {
    const found = search(k, columns.row, columns.start[k], columns.start[k + 1]);
    for (let e = columns.start[k]; e < columns.start[k + 1]; e++) {
      xRe[columns.row[e]] += re[columns.source[e]];
      if (im) xIm[columns.row[e]] += im[columns.source[e]];
    }
    for (const i of found) {
      const j = place[i];
      if (j < 0) continue;
      uRow.push(j);
      const re0 = xRe[i];
      const im0 = xIm[i];
      for (let l = lStart[j]; l < lStart[j + 1]; l++) xRe[lRow[l]] -= lRe[l] * re0 - lIm[l] * im0;
      if (!im) continue;
      for (let l = lStart[j]; l < lStart[j + 1]; l++) xIm[lRow[l]] -= lRe[l] * im0 + lIm[l] * re0;
    }
    uStart[k + 1] = uRow.length;
    let pivot = -1;
    let size = -1;
    for (const i of found) {
      if (place[i] >= 0) continue;
      const here = Math.abs(xRe[i]) + Math.abs(xIm[i]);
      if (here > size) [pivot, size] = [i, here];
    }
    const own = order[k];
    const ownSize = Math.abs(xRe[own]) + Math.abs(xIm[own]);
    if (place[own] < 0 && ownSize > 0 && ownSize >= diagonalEnough * size) [pivot, size] = [own, ownSize];
    if (
      pivot < 0 ||
      !(size > tiny * Math.min(scale.row[pivot], scale.column[order[k]])) ||
      size === Number.POSITIVE_INFINITY
    )
      return undefined;
    place[pivot] = k;
    row[k] = pivot;
    const pRe = xRe[pivot];
    const pIm = xIm[pivot];
    const square = pRe * pRe + pIm * pIm;
    for (const i of found) {
      if (place[i] < 0) {
        lRow.push(i);
        lRe.push(im ? (xRe[i] * pRe + xIm[i] * pIm) / square : xRe[i] / pRe);
        lIm.push(im ? (xIm[i] * pRe - xRe[i] * pIm) / square : 0);
      }
      xRe[i] = 0;
      xIm[i] = 0;
    }
    lStart[k + 1] = lRow.length;
  }
  const sortedU = Int32Array.from(uRow);
  for (let k = 0; k < n; k++) sortedU.subarray(uStart[k], uStart[k + 1]).sort();
  return {
    column: order,
    place,
    row,
    lStart,
    lRow: Int32Array.from(lRow, (i) => place[i]),
    uStart,
    uRow: sortedU,
    start: columns.start,
    source: columns.source,
    target: columns.row.map((i) => place[i]),
  };
}

/** The entries by columns, in the given order of columns. */
function byColumns({ size: n, start: rows, column }: Pattern, order: Int32Array) {
  const place = new Int32Array(n);
  order.forEach((j, k) => {
    place[j] = k;
  });
  const start = new Int32Array(n + 1);
  for (const j of column) start[place[j] + 1]++;
  for (let k = 0; k < n; k++) start[k + 1] += start[k];
  const next = start.slice(0, n);
  const row = new Int32Array(column.length);
  const source = new Int32Array(column.length);
  for (let i = 0; i < n; i++) {
    for (let e = rows[i]; e < rows[i + 1]; e++) {
      const at = next[place[column[e]]]++;
      row[at] = i;
      source[at] = e;
    }
  }
  return { start, row, source };
}

/** Rows that may be non-zero once the columns before are eliminated from column k: each before all that it changes. */
type Reach = (k: number, rows: Int32Array, from: number, to: number) => readonly number[];

function reach(n: number, place: Int32Array, lStart: Int32Array, lRow: readonly number[]): Reach {
  const mark = new Int32Array(n).fill(-1);
  const path = new Int32Array(n);
  const cursor = new Int32Array(n);
  return (k, rows, from, to) => {
    const done: number[] = [];
    for (let e = from; e < to; e++) {
      if (mark[rows[e]] === k) continue;
      let depth = 0;
      path[0] = rows[e];
      mark[rows[e]] = k;
      cursor[0] = place[rows[e]] < 0 ? 0 : lStart[place[rows[e]]];
      while (depth >= 0) {
        const j = place[path[depth]];
        const end = j < 0 ? 0 : lStart[j + 1];
        let deeper = false;
        while (!deeper && cursor[depth] < end) {
          const i = lRow[cursor[depth]++];
          if (mark[i] === k) continue;
          mark[i] = k;
          path[++depth] = i;
          cursor[depth] = place[i] < 0 ? 0 : lStart[place[i]];
          deeper = true;
        }
        if (!deeper) done.push(path[depth--]);
      }
    }
    return done.reverse();
  };
}
