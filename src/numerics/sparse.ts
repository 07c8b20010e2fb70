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
 * Collects entries row by row in two rounds, so that beside the matrix itself nothing is as long: first every row is told how many
 * entries come (`expect`), then they are handed over in any order (`add`); entries at one place are added up.
 */
export class RowBuilder {
  private readonly start: Int32Array;
  private next = new Int32Array(0);
  private column = new Int32Array(0);
  private value = new Float64Array(0);

  constructor(private readonly size: number) {
    this.start = new Int32Array(size + 1);
  }

  expect(row: number): void {
    this.start[row + 1]++;
  }

  add(row: number, column: number, value: number): void {
    if (this.next.length === 0) this.begin();
    const at = this.next[row]++;
    this.column[at] = column;
    this.value[at] = value;
  }

  /** Columns ascending in every row. */
  rows(): SparseRows {
    if (this.next.length === 0) this.begin();
    const { size, start, column, value } = this;
    let n = 0;
    for (let i = 0; i < size; i++) {
      const [from, to] = [start[i], start[i + 1]];
      sortRow(column, value, from, to);
      start[i] = n;
      for (let e = from; e < to; e++) {
        if (n > start[i] && column[n - 1] === column[e]) value[n - 1] += value[e];
        else {
          column[n] = column[e];
          value[n++] = value[e];
        }
      }
    }
    start[size] = n;
    return { size, start, column: column.subarray(0, n), value: value.subarray(0, n) };
  }

  private begin(): void {
    const { size, start } = this;
    for (let i = 0; i < size; i++) start[i + 1] += start[i];
    this.next = start.slice(0, size);
    this.column = new Int32Array(start[size]);
    this.value = new Float64Array(start[size]);
  }
}

/** Rows shorter than this are sorted by insertion. */
const shortRow = 32;

/** Sorts a stretch by column; what has one column stays in its order. */
function sortRow(column: Int32Array, value: Float64Array, from: number, to: number): void {
  if (to - from > shortRow) {
    const order = Int32Array.from({ length: to - from }, (_, k) => from + k).sort(
      (a, b) => column[a] - column[b] || a - b,
    );
    const [columns, values] = [column.slice(from, to), value.slice(from, to)];
    order.forEach((e, k) => {
      column[from + k] = columns[e - from];
      value[from + k] = values[e - from];
    });
    return;
  }
  for (let e = from + 1; e < to; e++) {
    const [c, v] = [column[e], value[e]];
    let at = e;
    for (; at > from && column[at - 1] > c; at--) {
      column[at] = column[at - 1];
      value[at] = value[at - 1];
    }
    column[at] = c;
    value[at] = v;
  }
}

/** The matrix with the given entries, columns ascending in every row; entries at one place are added. */
export function gatherRows(
  size: number,
  row: ArrayLike<number>,
  column: ArrayLike<number>,
  value: ArrayLike<number>,
): SparseRows {
  const builder = new RowBuilder(size);
  for (let e = 0; e < value.length; e++) builder.expect(row[e]);
  for (let e = 0; e < value.length; e++) builder.add(row[e], column[e], value[e]);
  return builder.rows();
}
