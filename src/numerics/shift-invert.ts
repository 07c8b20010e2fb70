import { bicgstab } from "./bicgstab.js";
import { incompleteLu } from "./ilu.js";
import type { IterativeMethod } from "./krylov.js";
import type { MixedRows } from "./mixed-rows.js";
import { multiply } from "./sparse.js";

/** How far a solve goes; what it leaves is an error of the space. */
const goal = { relative: 1e-12, most: 2000 };

/** Solves (shift - A) x = b for rows of rates, the unknowns that hold nothing following: BiCGStab behind incomplete LU. */
export interface ShiftedSolver {
  /** x is where to begin and becomes the solution; b is 0 for unknowns that hold nothing. False where it did not get there. */
  solve(b: Float64Array, x: Float64Array): boolean;
  /** Products with the matrix so far. */
  readonly products: number;
}

/** @returns undefined where a pivot vanishes */
export function shiftedSolver(rows: MixedRows, shift: number): ShiftedSolver | undefined {
  const { size, states, start, column } = rows;
  // Every row needs its diagonal; those of unknowns that hold nothing lack it.
  const begin = new Int32Array(size + 1);
  for (let i = 0; i < size; i++) begin[i + 1] = begin[i] + start[i + 1] - start[i] + (i < states ? 0 : 1);
  const columns = new Int32Array(begin[size]);
  const value = new Float64Array(begin[size]);
  for (let i = 0, at = 0; i < size; i++) {
    let placed = i < states;
    for (let e = start[i]; e <= start[i + 1]; e++) {
      if (!placed && (e === start[i + 1] || column[e] > i)) {
        columns[at] = i;
        value[at++] = 1;
        placed = true;
      }
      if (e === start[i + 1]) break;
      columns[at] = column[e];
      value[at++] = (column[e] === i ? shift : 0) - rows.value[e];
    }
  }
  const matrix = { size, start: begin, column: columns, value };
  const preconditioner = incompleteLu(matrix);
  if (!preconditioner.take(value)) return undefined;
  const method: IterativeMethod = bicgstab({ size, multiply: (x, y) => multiply(matrix, x, y), preconditioner });
  let products = 0;
  return {
    solve(b, x) {
      x.set(b);
      preconditioner.apply(x);
      const done = method(b, x, goal);
      products += done.products;
      return done.reached || done.residual < 1e-11;
    },
    get products() {
      return products;
    },
  };
}
