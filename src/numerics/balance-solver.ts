import { bicgstab, bicgstabSpace } from "./bicgstab.js";
import { flowOrder } from "./flow-order.js";
import type { Graph } from "./graph.js";
import { incompleteLu, solveIlu } from "./ilu.js";
import { multiply, type SparseRows } from "./sparse.js";

/** A part of the residual that a round of the iteration is to leave, and how many rounds and steps it may take. */
const perRound = 1e-7;
const mostRounds = 40;
const mostSteps = 2000;
/** A correction smaller than this beside the largest entry is rounding. */
const settled = 2e-15;

/**
 * Solves inflow_i x_i - sum of flow_k x_from(k) = inflow_i b_i over many nodes that feed one another: a sparse M-matrix.
 * BiCGStab behind an incomplete LU in flow order, its answer refined until nothing changes but the last digits. Memory
 * linear in nodes and edges.
 * @param flow   of each edge, not negative
 * @param inflow of each node, edges from outside included; nodes without inflow keep x = b
 */
export interface BalanceSolver {
  /** b becomes x. False where the iteration did not get there: b is then as near as it got. */
  solve(b: Float64Array): boolean;
}

export function balanceSolver(
  graph: Graph,
  flow: ArrayLike<number>,
  inflow: ArrayLike<number>,
): BalanceSolver | undefined {
  const n = graph.size;
  const order = flowOrder(graph, flow, inflow);
  const place = new Int32Array(n);
  for (let p = 0; p < n; p++) place[order[p]] = p;
  const matrix = balanceMatrix(graph, flow, inflow, place, order);
  const factors = incompleteLu(matrix);
  if (!factors) return undefined;
  const space = bicgstabSpace(n);
  const operator = {
    size: n,
    apply: (x: Float64Array, y: Float64Array) => multiply(matrix, x, y),
    precondition: (r: Float64Array, z: Float64Array) => solveIlu(factors, r, z),
  };
  const [rhs, x, correction, residual] = [0, 1, 2, 3].map(() => new Float64Array(n));
  return {
    solve(b) {
      for (let p = 0; p < n; p++) rhs[p] = b[order[p]];
      x.fill(0);
      residual.set(rhs);
      let last = Number.POSITIVE_INFINITY;
      let good = false;
      for (let round = 0; round < mostRounds; round++) {
        const reached = bicgstab(operator, residual, correction, perRound, mostSteps, space);
        if (Number.isNaN(reached)) solveIlu(factors, residual, correction); // a step of plain iteration instead
        let [change, size] = [0, 0];
        for (let p = 0; p < n; p++) {
          x[p] += correction[p];
          change = Math.max(change, Math.abs(correction[p]));
          size = Math.max(size, Math.abs(x[p]));
        }
        good = change <= 1e-12 * size;
        if (change <= settled * size || (good && change > last / 4)) break;
        last = change;
        multiply(matrix, x, residual);
        for (let p = 0; p < n; p++) residual[p] = rhs[p] - residual[p];
      }
      for (let p = 0; p < n; p++) b[order[p]] = x[p];
      return good;
    },
  };
}

/** I - flow / inflow, rows and columns in the given order, columns ascending, edges between the same two nodes added. */
function balanceMatrix(
  { size, from, to }: Graph,
  flow: ArrayLike<number>,
  inflow: ArrayLike<number>,
  place: Int32Array,
  order: Int32Array,
): SparseRows {
  // Edges by column first: handing them out in that order leaves every row's columns ascending.
  const byColumn = new Int32Array(size + 1);
  for (let k = 0; k < flow.length; k++) byColumn[place[from[k]] + 1]++;
  for (let p = 0; p < size; p++) byColumn[p + 1] += byColumn[p];
  const edges = new Int32Array(flow.length);
  for (let k = 0; k < flow.length; k++) edges[byColumn[place[from[k]]]++] = k;
  const start = new Int32Array(size + 1);
  for (let k = 0; k < flow.length; k++) start[place[to[k]] + 1]++;
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
      const part = inflow[order[row]] > 0 ? flow[k] / inflow[order[row]] : 0;
      const before = next[row] - 1;
      if (before >= start[row] && column[before] === c) value[before] -= part;
      else {
        column[next[row]] = c;
        value[next[row]++] = -part;
      }
    }
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
