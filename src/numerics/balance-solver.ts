import { bicgstab } from "./bicgstab.js";
import { flowOrder } from "./flow-order.js";
import type { Graph } from "./graph.js";
import { incompleteLu } from "./ilu.js";
import { multiply, type SparseRows } from "./sparse.js";

/** A part of the residual that a round of the iteration is to leave, and how many rounds and products it may take. */
const goal = { relative: 1e-7, most: 4000 };
const mostRounds = 40;
/** Of what incomplete elimination leaves out, so much goes to the diagonal. */
const kept = 0.95;
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
  const whole = new Float64Array(n).fill(1);
  const order = flowOrder(graph, part, whole);
  const place = new Int32Array(n);
  for (let p = 0; p < n; p++) place[order[p]] = p;
  const outside = excess.map((_, p) => excess[order[p]]);
  const matrix = balanceMatrix(graph, part, outside, place);
  const preconditioner = incompleteLu(matrix, kept);
  if (!preconditioner.take(matrix.value)) return undefined;
  const iterate = bicgstab({ size: n, multiply: (x, y) => multiply(matrix, x, y), preconditioner });
  const [rhs, x, correction, residual] = [0, 1, 2, 3].map(() => new Float64Array(n));
  return {
    solve(b) {
      for (let p = 0; p < n; p++) rhs[p] = b[order[p]];
      x.fill(0);
      residual.set(rhs);
      let last = Number.POSITIVE_INFINITY;
      let good = false;
      for (let round = 0; round < mostRounds; round++) {
        correction.fill(0);
        if (!(iterate(residual, correction, goal).residual < 1)) {
          // No nearer: a step of plain iteration instead.
          correction.set(residual);
          preconditioner.apply(correction);
        }
        let [change, size] = [0, 0];
        for (let p = 0; p < n; p++) {
          x[p] += correction[p];
          change = Math.max(change, Math.abs(correction[p]));
          size = Math.max(size, Math.abs(x[p]));
        }
        const worst = leftOver(matrix, outside, rhs, x, residual);
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
  { size, start, column, value }: SparseRows,
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
      if (column[e] === i) continue;
      const term = value[e] * (x[i] - x[column[e]]);
      sum += term;
      terms += Math.abs(term);
    }
    r[i] = sum;
    if (terms > 0) worst = Math.max(worst, Math.abs(sum) / terms);
  }
  return worst;
}

/** Rows and columns in the given order, columns ascending, edges between the same two nodes added; -a_ij beside the sum. */
function balanceMatrix(
  { size, from, to }: Graph,
  part: ArrayLike<number>,
  excess: Float64Array,
  place: Int32Array,
): SparseRows {
  // Edges by column first: handing them out in that order leaves every row's columns ascending.
  const byColumn = new Int32Array(size + 1);
  for (let k = 0; k < part.length; k++) byColumn[place[from[k]] + 1]++;
  for (let p = 0; p < size; p++) byColumn[p + 1] += byColumn[p];
  const edges = new Int32Array(part.length);
  for (let k = 0; k < part.length; k++) edges[byColumn[place[from[k]]]++] = k;
  const start = new Int32Array(size + 1);
  for (let k = 0; k < part.length; k++) start[place[to[k]] + 1]++;
  for (let p = 0; p < size; p++) start[p + 1] += start[p] + 1; // and the diagonal
  const column = new Int32Array(start[size]);
  const value = new Float64Array(start[size]);
  const next = start.slice(0, size);
  const diagonal = (p: number): void => {
    column[next[p]] = p;
    value[next[p]++] = 1;
  };
  let e = 0;
  for (let c = 0; c < size; c++) {
    // A row's diagonal comes when its column does.
    diagonal(c);
    for (; e < byColumn[c]; e++) {
      const k = edges[e];
      const row = place[to[k]];
      if (row === c) continue; // what a node sends to itself cancels
      const before = next[row] - 1;
      if (before >= start[row] && column[before] === c) value[before] -= part[k];
      else {
        column[next[row]] = c;
        value[next[row]++] = -part[k];
      }
    }
  }
  for (let row = 0; row < size; row++) {
    let [sum, at] = [excess[row], -1];
    for (let e = start[row]; e < next[row]; e++) {
      if (column[e] === row) at = e;
      else sum -= value[e];
    }
    value[at] = sum > 0 ? sum : 1;
  }
  return packed(size, start, next, column, value);
}

/** Rows without the room left by edges that were added together. */
function packed(size: number, start: Int32Array, end: Int32Array, column: Int32Array, value: Float64Array): SparseRows {
  const tight = new Int32Array(size + 1);
  let n = 0;
  for (let i = 0; i < size; i++) {
    for (let e = start[i]; e < end[i]; e++) {
      column[n] = column[e];
      value[n++] = value[e];
    }
    tight[i + 1] = n;
  }
  return { size, start: tight, column: column.subarray(0, n), value: value.subarray(0, n) };
}
