import { factor, type Lu, solve, solveTransposed } from "../numerics/lu.js";

/** A square sparse matrix of square blocks: row i maps column j to a block, size x size, row-major. */
export interface BlockMatrix {
  readonly size: number;
  readonly rows: readonly Map<number, Float64Array>[];
}

/** A matrix of `count` x `count` blocks, all zero. */
export const blockMatrix = (count: number, size: number): BlockMatrix => ({
  size,
  rows: Array.from({ length: count }, () => new Map<number, Float64Array>()),
});

/** The block at (i, j), made where it is missing. */
export function block(m: BlockMatrix, i: number, j: number): Float64Array {
  let b = m.rows[i].get(j);
  if (!b) {
    b = new Float64Array(m.size * m.size);
    m.rows[i].set(j, b);
  }
  return b;
}

/** Sets every block to zero and keeps the pattern. */
export function clear(m: BlockMatrix): void {
  for (const row of m.rows) for (const b of row.values()) b.fill(0);
}

/**
 * Solves M x = b by block elimination in the given order, pivoting inside blocks only: right for the diagonally dominant
 * matrices of flow networks, with little fill where the order follows the flow. `m` is left as it is; b becomes x.
 * @returns false where a diagonal block turned out singular; b is then worthless
 */
export function solveBlocks(m: BlockMatrix, b: Float64Array): boolean {
  const { size: n } = m;
  const count = m.rows.length;
  const rows = m.rows.map((row) => new Map([...row].map(([j, block]) => [j, block.slice()])));
  const below: Set<number>[] = rows.map(() => new Set());
  rows.forEach((row, i) => {
    for (const j of row.keys()) if (j < i) below[j].add(i);
  });
  const pivots: Lu[] = [];
  const line = new Float64Array(n);
  for (let k = 0; k < count; k++) {
    const diagonal = rows[k].get(k);
    const lu = diagonal ? factor(diagonal, n) : "singular";
    if (lu === "singular") return false;
    pivots.push(lu);
    for (const i of below[k]) {
      const left = rows[i].get(k);
      if (!left) continue;
      for (let r = 0; r < n; r++) {
        line.set(left.subarray(r * n, r * n + n));
        solveTransposed(lu, line); // row r of A_ik / A_kk
        left.set(line, r * n);
        for (let c = 0; c < n; c++) b[i * n + r] -= line[c] * b[k * n + c];
      }
      for (const [j, above] of rows[k]) {
        if (j <= k) continue;
        let target = rows[i].get(j);
        if (!target) {
          target = new Float64Array(n * n);
          rows[i].set(j, target);
          if (j < i) below[j].add(i);
        }
        subtractProduct(target, left, above, n);
      }
    }
  }
  for (let k = count - 1; k >= 0; k--) {
    const x = b.subarray(k * n, k * n + n);
    for (const [j, above] of rows[k]) {
      if (j <= k) continue;
      for (let r = 0; r < n; r++) for (let c = 0; c < n; c++) x[r] -= above[r * n + c] * b[j * n + c];
    }
    solve(pivots[k], x);
  }
  return true;
}

/** target -= left * right, all n x n. */
function subtractProduct(target: Float64Array, left: Float64Array, right: Float64Array, n: number): void {
  for (let r = 0; r < n; r++) {
    for (let k = 0; k < n; k++) {
      const l = left[r * n + k];
      if (l === 0) continue;
      for (let c = 0; c < n; c++) target[r * n + c] -= l * right[k * n + c];
    }
  }
}
