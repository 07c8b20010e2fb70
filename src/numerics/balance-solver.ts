import { FlowBlocks } from "./flow-blocks.js";
import { type FlowRows, flowRows } from "./flow-rows.js";
import type { Graph } from "./graph.js";

/** A part of the residual that a round of the iteration is to leave, and how many rounds and products it may take. */
const goal = { relative: 1e-7, most: 4000 };
const mostRounds = 40;
/** A correction smaller than this beside the largest entry is rounding. */
const settled = 2e-15;
/** A residual smaller than this beside the terms that it is the sum of is rounding. */
const rounding = 4 * Number.EPSILON;

/**
 * Solves excess_i x_i + sum_j a_ij (x_i - x_j) = b_i over many nodes that feed one another: a_ij is the part of what enters
 * node i that comes from node j, excess_i the part that comes from outside. BiCGStab behind an incomplete LU in flow order;
 * its answer is refined by residuals in this very form, where only differences of neighbours are rounded, so that digits
 * last however often the flow goes round. Memory linear in nodes and edges.
 */
export interface BalanceSolver {
  /** b becomes x. False where the iteration did not get there: b is then as near as it got. */
  solve(b: Float64Array): boolean;
}

/**
 * @param part   of each edge: what it brings over all that enters its end, not negative
 * @param excess of each node; with the parts of its edges it makes 1, or all are 0
 * @returns undefined where a pivot vanishes: nothing comes from outside
 */
export function balanceSolver(graph: Graph, part: ArrayLike<number>, excess: Float64Array): BalanceSolver | undefined {
  const n = graph.size;
  const rows = flowRows(graph, part);
  const { order } = rows;
  const outside = excess.map((_, p) => excess[order[p]]);
  const blocks = new FlowBlocks(rows, 1);
  const { diagonal } = blocks;
  for (let p = 0; p < n; p++) {
    // What a node sends to itself cancels.
    let sum = outside[p];
    for (let e = rows.start[p]; e < rows.start[p + 1]; e++) sum += rows.share[e];
    diagonal[p] = sum > 0 ? sum : 1;
  }
  if (!blocks.factor()) return undefined;
  const [rhs, x, correction, residual] = [0, 1, 2, 3].map(() => new Float64Array(n));
  return {
    solve(b) {
      for (let p = 0; p < n; p++) rhs[p] = b[order[p]];
      x.fill(0);
      residual.set(rhs);
      let last = Number.POSITIVE_INFINITY;
      let good = false;
      for (let round = 0; round < mostRounds; round++) {
        if (!(blocks.solve(residual, correction, goal).residual < 1)) {
          // No nearer: a step of plain iteration instead.
          for (let p = 0; p < n; p++) correction[p] = residual[p] / diagonal[p];
        }
        let [change, size] = [0, 0];
        for (let p = 0; p < n; p++) {
          x[p] += correction[p];
          change = Math.max(change, Math.abs(correction[p]));
          size = Math.max(size, Math.abs(x[p]));
        }
        const worst = leftOver(rows, outside, rhs, x, residual);
        // Where b all but cancels, no x leaves less than the rounding of its own terms: that is as near as it gets.
        good = change <= 1e-12 * size || worst <= rounding;
        if (change <= settled * size || (good && change > last / 4)) break;
        last = change;
      }
      for (let p = 0; p < n; p++) b[order[p]] = x[p];
      return good;
    },
  };
}

/** b - A x, summed as differences; returns the largest of it beside the terms of its row. */
function leftOver(
  { size, start, column, share }: FlowRows,
  excess: Float64Array,
  b: Float64Array,
  x: Float64Array,
  r: Float64Array,
): number {
  let worst = 0;
  for (let i = 0; i < size; i++) {
    let sum = b[i] - excess[i] * x[i];
    let terms = Math.abs(b[i]) + Math.abs(excess[i] * x[i]);
    for (let e = start[i]; e < start[i + 1]; e++) {
      const term = share[e] * (x[i] - x[column[e]]);
      sum -= term;
      terms += Math.abs(term);
    }
    r[i] = sum;
    if (terms > 0) worst = Math.max(worst, Math.abs(sum) / terms);
  }
  return worst;
}
