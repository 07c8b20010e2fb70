/** A sparse matrix by rows: row i holds column[k], value[k] for start[i] <= k < start[i+1]. */
export interface SparseRows {
  readonly size: number;
  readonly start: Int32Array;
  readonly column: Int32Array;
  readonly value: Float64Array;
}

/** Rows given as maps column -> value. */
export function sparseRows(rows: readonly ReadonlyMap<number, number>[]): SparseRows {
  const start = new Int32Array(rows.length + 1);
  rows.forEach((row, i) => {
    start[i + 1] = start[i] + row.size;
  });
  const column = new Int32Array(start[rows.length]);
  const value = new Float64Array(start[rows.length]);
  let k = 0;
  for (const row of rows) {
    for (const [j, v] of [...row].sort((a, b) => a[0] - b[0])) {
      column[k] = j;
      value[k++] = v;
    }
  }
  return { size: rows.length, start, column, value };
}

/** y = A x; no allocation. */
export function multiply(a: SparseRows, x: Float64Array, y: Float64Array): void {
  const { start, column, value } = a;
  let k = 0;
  for (let i = 0; i < a.size; i++) {
    let sum = 0;
    for (const end = start[i + 1]; k < end; k++) sum += value[k] * x[column[k]];
    y[i] = sum;
  }
}

/**
 * The matrix with the given entries, columns ascending in every row; entries at one place are added. Time and memory linear in
 * entries.
 */
export function gatherRows(
  size: number,
  row: ArrayLike<number>,
  column: ArrayLike<number>,
  value: ArrayLike<number>,
): SparseRows {
  // Entries by column first: handing them out in that order leaves every row's columns ascending.
  const byColumn = new Int32Array(size + 1);
  for (let e = 0; e < value.length; e++) byColumn[column[e] + 1]++;
  for (let j = 0; j < size; j++) byColumn[j + 1] += byColumn[j];
  const entries = new Int32Array(value.length);
  for (let e = 0; e < value.length; e++) entries[byColumn[column[e]]++] = e;
  const start = new Int32Array(size + 1);
  for (let e = 0; e < value.length; e++) start[row[e] + 1]++;
  for (let i = 0; i < size; i++) start[i + 1] += start[i];
  const next = start.slice(0, size);
  const columns = new Int32Array(value.length);
  const values = new Float64Array(value.length);
  for (const e of entries) {
    const at = next[row[e]];
    if (at > start[row[e]] && columns[at - 1] === column[e]) values[at - 1] += value[e];
    else {
      columns[at] = column[e];
      values[at] = value[e];
      next[row[e]]++;
    }
  }
  const tight = new Int32Array(size + 1);
  let n = 0;
  for (let i = 0; i < size; i++) {
    for (let e = start[i]; e < next[i]; e++) {
      columns[n] = columns[e];
      values[n++] = values[e];
    }
    tight[i + 1] = n;
  }
  return { size, start: tight, column: columns.subarray(0, n), value: values.subarray(0, n) };
}
