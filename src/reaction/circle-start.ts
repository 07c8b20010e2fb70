import { balanceSolver } from "../numerics/balance-solver.js";
import type { Graph } from "../numerics/graph.js";
import type { Pass } from "./dispersion.js";
import type { Kinetics, Reactions } from "./kinetics.js";
import { settleMixed } from "./mixed.js";

/** Many nodes that feed one another, and what reaches them from elsewhere. Scaled concentrations, node by node. */
export interface Circle {
  /** Links among the nodes. */
  readonly graph: Graph;
  /** What each link brings over all that enters its end. */
  readonly share: Float64Array;
  /** What comes from elsewhere, in units of all that enters the node, and how much of that it is. */
  readonly outside: Float64Array;
  readonly excess: Float64Array;
  /** All that enters, m3/s, and volume over that, s. */
  readonly inflow: Float64Array;
  readonly tau: Float64Array;
  readonly part: Uint8Array;
  /** What bodies that are not mixed throughout make of their inflow. */
  readonly bodies: ReadonlyMap<number, Pass>;
  /** What reacts in each, where that is not the same everywhere. */
  readonly cells?: readonly Kinetics[] | undefined;
}

/** Every species as if nothing reacted; one composition from everywhere stays what it is. */
export function mixtures({ graph, share, outside, excess }: Circle, n: number): Float64Array | undefined {
  const count = graph.size;
  const mixed = new Float64Array(count * n);
  const column = new Float64Array(count);
  let solver: ReturnType<typeof balanceSolver> | undefined;
  for (let i = 0; i < n; i++) {
    let [low, high] = [Number.POSITIVE_INFINITY, 0];
    for (let k = 0; k < count; k++) {
      if (!(excess[k] > 1e-300)) continue;
      const c = outside[k * n + i] / excess[k];
      low = Math.min(low, c);
      high = Math.max(high, c);
    }
    if (high - low <= 1e-14 * high) {
      for (let k = 0; k < count; k++) mixed[k * n + i] = (low + high) / 2;
      continue;
    }
    for (let k = 0; k < count; k++) column[k] = outside[k * n + i];
    solver ??= balanceSolver(graph, share, excess);
    if (!solver?.solve(column)) return undefined;
    for (let k = 0; k < count; k++) mixed[k * n + i] = Math.max(column[k], 0);
  }
  return mixed;
}

/**
 * What would be in one tank for the whole circle, over what would be there without reaction: a first idea of how far reaction
 * gets, by species. Ones where it does not settle.
 */
export function startOf({ outside, excess, inflow, tau }: Circle, { cell }: Reactions): Float64Array {
  const n = cell.size;
  const entering = new Float64Array(n);
  let [fed, volume] = [0, 0];
  for (let k = 0; k < inflow.length; k++) {
    fed += inflow[k] * excess[k];
    volume += inflow[k] * tau[k];
    for (let i = 0; i < n; i++) entering[i] += inflow[k] * outside[k * n + i];
  }
  for (let i = 0; i < n; i++) entering[i] /= fed;
  const tank = entering.slice();
  const settled = settleMixed(cell, entering, volume / fed, tank);
  const most = (i: number): number => (cell.thermal && i === n - 1 ? Number.POSITIVE_INFINITY : 1);
  return tank.map((c, i) => (settled && c > 0 && entering[i] > 0 ? Math.min(c / entering[i], most(i)) : 1));
}
