import { bicgstab } from "./bicgstab.js";
import { gmres } from "./gmres.js";
import { incompleteLu } from "./ilu.js";
import { type IterativeGoal, type IterativeMethod, type IterativeProblem, norm } from "./krylov.js";
import type { LinearSolver, Pattern } from "./linear-solver.js";
import { multiply, type SparseRows } from "./sparse.js";

export interface KrylovOptions extends Partial<IterativeGoal> {
  /** "bicgstab" (default) needs 7 vectors, "gmres" restart + 3 and never gets worse. */
  readonly method?: "bicgstab" | "gmres";
  readonly restart?: number;
}

/**
 * A Krylov method with incomplete LU behind the interface of the direct solvers: for large flow-dominated systems, where
 * its memory stays that of the matrix. A matrix on which incomplete LU breaks down counts as singular.
 */
export function krylovSolver(pattern: Pattern, o: KrylovOptions = {}): LinearSolver {
  const n = pattern.size;
  const value = new Float64Array(pattern.column.length);
  const matrix = { ...pattern, value };
  const preconditioner = incompleteLu(pattern);
  const problem: IterativeProblem = { size: n, multiply: (x, y) => multiply(matrix, x, y), preconditioner };
  const method: IterativeMethod = o.method === "gmres" ? gmres(problem, o.restart) : bicgstab(problem);
  const goal: IterativeGoal = { relative: o.relative ?? 1e-13, most: o.most ?? 2000 };
  const x = new Float64Array(n);
  return {
    size: n,
    factor(given) {
      value.set(given);
      return preconditioner.take(value);
    },
    solve(b) {
      x.set(b);
      preconditioner.apply(x);
      const { reached, residual } = method(b, x, goal);
      const good = reached || residual * norm(b) <= attainable(matrix, b, x);
      b.set(x);
      return good;
    },
  };
}

/** A residual that rounding alone may leave: a few times that of the products in A x, where rates spread over many decades. */
function attainable({ size, start, column, value }: SparseRows, b: Float64Array, x: Float64Array): number {
  let square = 0;
  for (let i = 0; i < size; i++) {
    let sum = Math.abs(b[i]);
    for (let k = start[i]; k < start[i + 1]; k++) sum += Math.abs(value[k] * x[column[k]]);
    square += sum * sum;
  }
  return 16 * Number.EPSILON * Math.sqrt(square);
}
