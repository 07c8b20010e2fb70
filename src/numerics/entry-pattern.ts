import type { Pattern } from "./linear-solver.js";

/** A pattern, and where in it what is. */
export interface EntryPattern {
  readonly pattern: Pattern;
  /** The entry of each (row[k], column[k]); those at one place share it. */
  readonly at: Int32Array;
  /** The entry of each row's diagonal. */
  readonly diagonal: Int32Array;
}

/** The pattern with entries at (row[k], column[k]) and on the whole diagonal. */
export function entryPattern(size: number, row: ArrayLike<number>, column: ArrayLike<number>): EntryPattern {
  const places = Array.from({ length: size }, (_, i) => [i]);
  for (let k = 0; k < row.length; k++) places[row[k]].push(column[k]);
  const start = new Int32Array(size + 1);
  const columns = places.map((own, i) => {
    const sorted = Int32Array.from(new Set(own)).sort();
    start[i + 1] = start[i] + sorted.length;
    return sorted;
  });
  const all = new Int32Array(start[size]);
  columns.forEach((own, i) => {
    all.set(own, start[i]);
  });
  const entry = (i: number, j: number): number => start[i] + firstNotBelow(columns[i], j);
  return {
    pattern: { size, start, column: all },
    at: Int32Array.from({ length: row.length }, (_, k) => entry(row[k], column[k])),
    diagonal: Int32Array.from({ length: size }, (_, i) => entry(i, i)),
  };
}

function firstNotBelow(ascending: Int32Array, wanted: number): number {
  let [low, high] = [0, ascending.length - 1];
  while (low < high) {
    const half = (low + high) >> 1;
    if (ascending[half] < wanted) low = half + 1;
    else high = half;
  }
  return low;
}
