import type { Pattern } from "./linear-solver.js";

/**
 * Nodes and elements (what is left of eliminated nodes) in one pool of lists: that of node i holds first `elements[i]` elements,
 * then nodes, `length[i]` in all; that of an element its nodes. A node that is eliminated or merged has weight 0.
 */
export interface QuotientGraph {
  pool: Int32Array;
  free: number;
  readonly start: Int32Array;
  readonly length: Int32Array;
  readonly elements: Int32Array;
  /** How many original nodes a node stands for. */
  readonly weight: Int32Array;
  /** Of an element: the weight of its nodes. Of a node, inside a round: weight of its neighbours outside the new element. */
  readonly size: Float64Array;
  readonly gone: Uint8Array;
  readonly mark: Int32Array;
  marks: number;
}

export function quotientGraph({ size: n, start: rows, column }: Pattern): QuotientGraph {
  const length = new Int32Array(n);
  const each = (visit: (i: number, j: number) => void): void => {
    for (let i = 0; i < n; i++) for (let k = rows[i]; k < rows[i + 1]; k++) if (column[k] !== i) visit(i, column[k]);
  };
  each((i, j) => {
    length[i]++;
    length[j]++;
  });
  const start = new Int32Array(n);
  for (let i = 1; i < n; i++) start[i] = start[i - 1] + length[i - 1];
  const both = n > 0 ? start[n - 1] + length[n - 1] : 0;
  const pool = new Int32Array(2 * both + n);
  length.fill(0);
  each((i, j) => {
    pool[start[i] + length[i]++] = j;
    pool[start[j] + length[j]++] = i;
  });
  const mark = new Int32Array(n).fill(-1);
  for (let i = 0; i < n; i++) {
    let end = start[i];
    for (let k = start[i]; k < start[i] + length[i]; k++) {
      if (mark[pool[k]] === i) continue;
      mark[pool[k]] = i;
      pool[end++] = pool[k];
    }
    length[i] = end - start[i];
  }
  return {
    pool,
    free: both,
    start,
    length,
    elements: new Int32Array(n),
    weight: new Int32Array(n).fill(1),
    size: new Float64Array(n),
    gone: new Uint8Array(n),
    mark,
    marks: n,
  };
}

/** The nodes that eliminating the pivot ties together; its elements are absorbed. They keep mark `marks`. */
export function formElement(g: QuotientGraph, pivot: number): number[] {
  const tied: number[] = [];
  const mark = ++g.marks;
  g.mark[pivot] = mark;
  const add = (from: number, to: number): void => {
    for (let k = from; k < to; k++) {
      const i = g.pool[k];
      if (g.weight[i] === 0 || g.mark[i] === mark) continue;
      g.mark[i] = mark;
      tied.push(i);
    }
  };
  const first = g.start[pivot];
  for (let k = first; k < first + g.elements[pivot]; k++) {
    const e = g.pool[k];
    if (g.gone[e]) continue;
    add(g.start[e], g.start[e] + g.length[e]);
    g.gone[e] = 1;
  }
  add(first + g.elements[pivot], first + g.length[pivot]);
  return tied;
}

/** Drops from the list of i what the new element covers and puts that element there. */
export function prune(
  g: QuotientGraph,
  i: number,
  pivot: number,
  stamp: Float64Array,
  round: number,
): { outside: number; hash: number } {
  const { pool, start, length, elements, weight, gone, mark, marks } = g;
  const first = start[i];
  let end = first;
  let outside = 0;
  let hash = pivot;
  for (let k = first; k < first + elements[i]; k++) {
    const e = pool[k];
    if (gone[e]) continue;
    const beyond = stamp[e] - round;
    if (beyond <= 0) {
      gone[e] = 1; // wholly inside the new element
      continue;
    }
    outside += beyond;
    hash += e;
    pool[end++] = e;
  }
  const nodesFrom = first + elements[i];
  const nodesTo = first + length[i];
  // One place is free for the new element: what tied i to the pivot (the pivot itself or an absorbed element) has gone.
  const elementsEnd = end;
  let nodes = 0;
  for (let k = nodesFrom; k < nodesTo; k++) {
    const j = pool[k];
    if (j === pivot || weight[j] === 0 || mark[j] === marks) continue;
    outside += weight[j];
    hash += j;
    pool[end++] = j;
    nodes++;
  }
  if (nodes > 0) pool[end] = pool[elementsEnd];
  pool[elementsEnd] = pivot;
  elements[i] = elementsEnd - first + 1;
  length[i] = end - first + 1;
  return { outside, hash };
}

/** Merges nodes with the same neighbours into the first of them. */
export function mergeAlike(g: QuotientGraph, alike: readonly number[], merged: number[][]): void {
  for (const [a, i] of alike.entries()) {
    if (g.weight[i] === 0) continue;
    let mark = -1;
    for (const j of alike.slice(a + 1)) {
      if (g.weight[j] === 0 || g.length[j] !== g.length[i] || g.elements[j] !== g.elements[i]) continue;
      if (mark < 0) {
        mark = ++g.marks;
        for (let k = g.start[i]; k < g.start[i] + g.length[i]; k++) g.mark[g.pool[k]] = mark;
      }
      let same = true;
      for (let k = g.start[j]; same && k < g.start[j] + g.length[j]; k++) same = g.mark[g.pool[k]] === mark;
      if (!same) continue;
      g.weight[i] += g.weight[j];
      g.weight[j] = 0;
      merged[i].push(j);
    }
  }
}

export function becomeElement(g: QuotientGraph, pivot: number, members: readonly number[], size: number): void {
  if (g.free + members.length > g.pool.length) {
    const wider = new Int32Array(2 * (g.free + members.length));
    wider.set(g.pool);
    g.pool = wider;
  }
  g.start[pivot] = g.free;
  g.pool.set(members, g.free);
  g.free += members.length;
  g.length[pivot] = members.length;
  g.elements[pivot] = 0;
  g.weight[pivot] = 0;
  g.size[pivot] = size;
}
