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
