import { type SparseRows, sparseRows } from "../../src/numerics/sparse.js";
import { uniformSource } from "../simulate/seeded.js";

/** Entries of a dense row-major matrix that are not zero, as the solvers take them. */
export function fromDense(a: ArrayLike<number>, n: number): SparseRows {
  return sparseRows(
    Array.from({ length: n }, (_, i) => {
      const row = new Map<number, number>();
      for (let j = 0; j < n; j++) if (a[i * n + j] !== 0) row.set(j, a[i * n + j]);
      return row;
    }),
  );
}

export function toDense({ size: n, start, column, value }: SparseRows): Float64Array {
  const a = new Float64Array(n * n);
  for (let i = 0; i < n; i++) for (let k = start[i]; k < start[i + 1]; k++) a[i * n + column[k]] = value[k];
  return a;
}

/**
 * Upwind balances of n cells with random through-flows and exchanges that balance: rows (outflow + source) c - inflows c.
 * An M-matrix, as every flow network has. Demo data.
 * @param links streams per cell besides the main line
 * @param near how far a link may reach along the main line; default anywhere
 */
export function flowMatrix(n: number, links: number, seed: number, near = n): SparseRows {
  const random = uniformSource(seed);
  const rows = Array.from({ length: n }, () => new Map<number, number>());
  const add = (i: number, j: number, value: number): void => {
    rows[i].set(j, (rows[i].get(j) ?? 0) + value);
  };
  for (let i = 0; i < n; i++) {
    add(i, i, 1);
    if (i > 0) add(i, i - 1, -1);
    for (let k = 0; k < links; k++) {
      const j = Math.max(0, Math.min(n - 1, i + Math.round((2 * random() - 1) * Math.min(near, n))));
      if (j === i) continue;
      const exchange = 10 ** (4 * random() - 2);
      add(i, i, exchange);
      add(i, j, -exchange);
      add(j, j, exchange);
      add(j, i, -exchange);
    }
  }
  return sparseRows(rows);
}

/** A cube of cells with exchange between neighbours and flow along one axis. Demo data. */
export function lattice(side: number, seed: number): SparseRows {
  const random = uniformSource(seed);
  const n = side ** 3;
  const rows = Array.from({ length: n }, () => new Map<number, number>());
  const add = (i: number, j: number, value: number): void => {
    rows[i].set(j, (rows[i].get(j) ?? 0) + value);
  };
  for (let i = 0; i < n; i++) {
    add(i, i, 1);
    for (const step of [1, side, side * side]) {
      if (Math.floor(i / step) % side === side - 1) continue;
      const exchange = 0.5 + 1.5 * random();
      add(i, i, exchange);
      add(i + step, i + step, exchange);
      add(i, i + step, -exchange);
      add(i + step, i, -exchange - (step === side * side ? 1 : 0));
    }
  }
  return sparseRows(rows);
}

/** Row and column p[i] of the result are row and column i of A. */
export function renumbered(a: SparseRows, p: ArrayLike<number>): SparseRows {
  const rows = Array.from({ length: a.size }, () => new Map<number, number>());
  for (let i = 0; i < a.size; i++)
    for (let k = a.start[i]; k < a.start[i + 1]; k++) rows[p[i]].set(p[a.column[k]], a.value[k]);
  return sparseRows(rows);
}

export function shuffled(n: number, seed: number): Int32Array {
  const random = uniformSource(seed);
  const p = Int32Array.from({ length: n }, (_, i) => i);
  for (let i = n - 1; i > 0; i--) {
    const j = Math.floor(random() * (i + 1));
    [p[i], p[j]] = [p[j], p[i]];
  }
  return p;
}

/** Largest |b - A x| over the largest |A| |x| + |b|, row by row (componentwise backward error). */
export function sparseBackwardError(a: SparseRows, x: Float64Array, b: Float64Array): number {
  let worst = 0;
  for (let i = 0; i < a.size; i++) {
    let [sum, size] = [b[i], Math.abs(b[i])];
    for (let k = a.start[i]; k < a.start[i + 1]; k++) {
      sum -= a.value[k] * x[a.column[k]];
      size += Math.abs(a.value[k] * x[a.column[k]]);
    }
    worst = Math.max(worst, size > 0 ? Math.abs(sum) / size : 0);
  }
  return worst;
}
