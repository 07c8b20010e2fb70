import { FlowBlocks } from "./flow-blocks.js";
import { flowRows } from "./flow-rows.js";
import type { MixedRows } from "./mixed-rows.js";

/** How far a solve goes; what it leaves is an error of the space. */
const goal = { relative: 1e-12, most: 2000 };
/** A solve that came so far has done all that rounding lets it. */
const enough = 1e-11;

/** Solves (shift - A) x = b for rows of rates, the unknowns that hold nothing following: BiCGStab behind incomplete LU in flow order. */
export interface ShiftedSolver {
  /** b by state, 1/s times x; x by unknown. False where it did not get there. */
  solve(b: Float64Array, x: Float64Array): boolean;
  /** Products with the matrix so far. */
  readonly products: number;
}

/**
 * @param shift above 0, 1/s
 * @returns undefined where a pivot vanishes
 */
export function shiftedSolver(rows: MixedRows, shift: number): ShiftedSolver | undefined {
  const { size, states, start, column, value } = rows;
  // Every row over its diagonal: what is left is what neighbours bring.
  const diagonal = new Float64Array(size).fill(1);
  for (let i = 0; i < states; i++) {
    diagonal[i] = shift;
    for (let e = start[i]; e < start[i + 1]; e++) if (column[e] === i) diagonal[i] -= value[e];
  }
  const [from, to] = [new Int32Array(start[size]), new Int32Array(start[size])];
  const share = new Float64Array(start[size]);
  let links = 0;
  for (let i = 0; i < size; i++) {
    for (let e = start[i]; e < start[i + 1]; e++) {
      if (column[e] === i && i < states) continue;
      from[links] = column[e];
      to[links] = i;
      share[links++] = value[e] / diagonal[i];
    }
  }
  const graph = { size, from: from.subarray(0, links), to: to.subarray(0, links) };
  const placed = flowRows(graph, share.subarray(0, links));
  const blocks = new FlowBlocks(placed, 1);
  for (let p = 0; p < size; p++) blocks.diagonal[p] = 1 - placed.own[p];
  if (!blocks.factor()) return undefined;
  const { order } = placed;
  const [right, found] = [new Float64Array(size), new Float64Array(size)];
  let products = 0;
  return {
    solve(b, x) {
      for (let p = 0; p < size; p++) right[p] = order[p] < states ? b[order[p]] / diagonal[order[p]] : 0;
      const solved = blocks.solve(right, found, goal);
      products += solved.products;
      for (let p = 0; p < size; p++) x[order[p]] = found[p];
      return solved.residual < enough;
    },
    get products() {
      return products;
    },
  };
}
