import type { BalanceSolver } from "../numerics/balance-solver.js";
import { sparseSolver } from "../numerics/sparse-lu.js";

/**
 * x_i - sum_j w_ij x_j = b_i for weights that do not make 1 in a row, by sparse elimination.
 * @param row, column, weight  by entry; entries of one place add
 * @returns undefined where the equations have no one solution
 */
export function plainCircle(
  size: number,
  row: Int32Array,
  column: Int32Array,
  weight: Float64Array,
): BalanceSolver | undefined {
  const rows = Array.from({ length: size }, (_, i) => new Map([[i, 1]]));
  weight.forEach((w, k) => {
    rows[row[k]].set(column[k], (rows[row[k]].get(column[k]) ?? 0) - w);
  });
  const sorted = rows.map((r) => [...r].sort(([a], [b]) => a - b));
  const start = new Int32Array(size + 1);
  sorted.forEach((r, i) => {
    start[i + 1] = start[i] + r.length;
  });
  const solver = sparseSolver({ size, start, column: Int32Array.from(sorted.flatMap((r) => r.map(([j]) => j))) });
  return solver.factor(Float64Array.from(sorted.flatMap((r) => r.map(([, v]) => v)))) ? solver : undefined;
}
