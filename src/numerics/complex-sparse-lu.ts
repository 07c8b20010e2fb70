/**
 * Sparse complex elimination for many matrices of one pattern, without pivoting: meant for balances, whose rows are
 * dominated by their diagonal (where the real part of s is not negative). Fill is kept low by eliminating nodes with the
 * fewest neighbours first.
 * @see A. George, J.W.H. Liu, SIAM Rev. 31 (1989) 1-19 (minimum degree); T.A. Davis, Direct Methods for Sparse Linear
 *      Systems, SIAM 2006, ch. 6
 */
export interface SparseComplexLu {
  /** Entries; fill them with the matrix, then `factor` turns them into its factors. */
  readonly re: Float64Array;
  readonly im: Float64Array;
  /** Where the entry of link k is (row[k], column[k]); links at one place share it. */
  readonly at: Int32Array;
  /** Where the diagonal of each row is. */
  readonly diagonal: Int32Array;
  /** False where a pivot is zero or not finite. No allocation. */
  factor(): boolean;
  /** Solves in place. No allocation. */
  solve(re: Float64Array, im: Float64Array): void;
}

/** Prepares for matrices with entries at (row[k], column[k]) and on the diagonal. */
export function sparseComplexLu(size: number, row: ArrayLike<number>, column: ArrayLike<number>): SparseComplexLu {
  const { order, later } = minimumDegree(size, row, column);
  const place = new Int32Array(size);
  order.forEach((node, p) => {
    place[node] = p;
  });
  const pattern = rowsOf(order, later, place);
  const { start, columns, middle } = pattern;
  const re = new Float64Array(columns.length);
  const im = new Float64Array(columns.length);
  const at = Int32Array.from({ length: row.length }, (_, k) =>
    find(columns, start[place[row[k]]], start[place[row[k]] + 1], place[column[k]]),
  );
  const work = { re: new Float64Array(size), im: new Float64Array(size) };
  return {
    re,
    im,
    at,
    diagonal: Int32Array.from({ length: size }, (_, node) => middle[place[node]]),
    factor: () => factor(pattern, re, im, work.re, work.im),
    solve(bRe, bIm) {
      for (let p = 0; p < size; p++) {
        work.re[p] = bRe[order[p]];
        work.im[p] = bIm[order[p]];
      }
      substitute(pattern, re, im, work.re, work.im);
      for (let p = 0; p < size; p++) {
        bRe[order[p]] = work.re[p];
        bIm[order[p]] = work.im[p];
      }
    },
  };
}

/** Rows in the order of elimination: ascending columns, `middle` the index of the diagonal. */
interface Pattern {
  readonly start: Int32Array;
  readonly columns: Int32Array;
  readonly middle: Int32Array;
}

/** Nodes in the order of elimination, and for each the nodes that its elimination ties together: its later neighbours. */
function minimumDegree(size: number, row: ArrayLike<number>, column: ArrayLike<number>) {
  const near = Array.from({ length: size }, () => new Set<number>());
  for (let k = 0; k < row.length; k++) {
    if (row[k] === column[k]) continue;
    near[row[k]].add(column[k]);
    near[column[k]].add(row[k]);
  }
  const buckets: number[][] = Array.from({ length: size }, () => []); // by the number of neighbours
  const file = (node: number): void => {
    buckets[near[node].size].push(node);
  };
  for (let node = size - 1; node >= 0; node--) file(node);
  const order: number[] = [];
  const later: Int32Array[] = [];
  const done = new Uint8Array(size);
  for (let degree = 0; order.length < size; ) {
    const node = buckets[degree].pop();
    if (node === undefined) {
      degree++;
      continue;
    }
    if (done[node] || near[node].size !== degree) continue; // filed again under another degree
    done[node] = 1;
    const neighbours = [...near[node]];
    order.push(node);
    later[node] = Int32Array.from(neighbours);
    for (const a of neighbours) {
      near[a].delete(node);
      for (const b of neighbours) if (a !== b) near[a].add(b);
      file(a);
      degree = Math.min(degree, near[a].size);
    }
  }
  return { order, later };
}

function rowsOf(order: readonly number[], later: readonly Int32Array[], place: Int32Array): Pattern {
  const n = order.length;
  const before: number[][] = Array.from({ length: n }, () => []);
  const after = order.map((node) => later[node].map((other) => place[other]).sort());
  after.forEach((columns, p) => {
    for (const q of columns) before[q].push(p); // ascending, as p ascends
  });
  const start = new Int32Array(n + 1);
  for (let p = 0; p < n; p++) start[p + 1] = start[p] + before[p].length + 1 + after[p].length;
  const columns = new Int32Array(start[n]);
  const middle = new Int32Array(n);
  for (let p = 0; p < n; p++) {
    columns.set(before[p], start[p]);
    middle[p] = start[p] + before[p].length;
    columns[middle[p]] = p;
    columns.set(after[p], middle[p] + 1);
  }
  return { start, columns, middle };
}

function find(columns: Int32Array, from: number, to: number, wanted: number): number {
  let [low, high] = [from, to - 1];
  while (low < high) {
    const half = (low + high) >> 1;
    if (columns[half] < wanted) low = half + 1;
    else high = half;
  }
  return low;
}

/** Row by row; the inverse of each pivot takes the pivot's place. */
function factor(
  { start, columns, middle }: Pattern,
  re: Float64Array,
  im: Float64Array,
  rowRe: Float64Array,
  rowIm: Float64Array,
): boolean {
  for (let p = 0; p < middle.length; p++) {
    for (let e = start[p]; e < start[p + 1]; e++) {
      rowRe[columns[e]] = re[e];
      rowIm[columns[e]] = im[e];
    }
    for (let e = start[p]; e < middle[p]; e++) {
      const k = columns[e];
      const pivot = middle[k];
      const lRe = rowRe[k] * re[pivot] - rowIm[k] * im[pivot];
      const lIm = rowRe[k] * im[pivot] + rowIm[k] * re[pivot];
      re[e] = lRe;
      im[e] = lIm;
      for (let u = pivot + 1; u < start[k + 1]; u++) {
        const j = columns[u];
        rowRe[j] -= lRe * re[u] - lIm * im[u];
        rowIm[j] -= lRe * im[u] + lIm * re[u];
      }
    }
    for (let e = middle[p]; e < start[p + 1]; e++) {
      re[e] = rowRe[columns[e]];
      im[e] = rowIm[columns[e]];
    }
    const pivot = middle[p];
    const squared = re[pivot] * re[pivot] + im[pivot] * im[pivot];
    if (!(squared > 0) || !Number.isFinite(squared)) return false;
    re[pivot] /= squared;
    im[pivot] /= -squared;
  }
  return true;
}

function substitute(
  { start, columns, middle }: Pattern,
  re: Float64Array,
  im: Float64Array,
  xRe: Float64Array,
  xIm: Float64Array,
): void {
  const n = middle.length;
  for (let p = 0; p < n; p++) {
    for (let e = start[p]; e < middle[p]; e++) {
      const j = columns[e];
      xRe[p] -= re[e] * xRe[j] - im[e] * xIm[j];
      xIm[p] -= re[e] * xIm[j] + im[e] * xRe[j];
    }
  }
  for (let p = n - 1; p >= 0; p--) {
    let sumRe = xRe[p];
    let sumIm = xIm[p];
    for (let e = middle[p] + 1; e < start[p + 1]; e++) {
      const j = columns[e];
      sumRe -= re[e] * xRe[j] - im[e] * xIm[j];
      sumIm -= re[e] * xIm[j] + im[e] * xRe[j];
    }
    const pivot = middle[p];
    xRe[p] = sumRe * re[pivot] - sumIm * im[pivot];
    xIm[p] = sumRe * im[pivot] + sumIm * re[pivot];
  }
}
