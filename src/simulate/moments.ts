import { orders } from "../compartments/block.js";
import type { Plant } from "../compile/plant.js";
import { gainSeries } from "../transfer/gain.js";
import { NodeEquations } from "../transfer/node-equations.js";

/** Of the residence time at a node's outflow, for a unit of tracer put in: exact, no curve is summed. */
export interface NodeMoments {
  /** Share of the tracer that leaves through the node. */
  readonly share: number;
  /** s; s2; dimensionless. Each normalised by the share; NaN where nothing arrives. Infinite behind a laminar tube: the variance. */
  readonly mean: number;
  readonly variance: number;
  /** Undefined where nothing arrives or the variance is 0 or infinite. */
  readonly skewness: number | undefined;
}

/**
 * Moments at every node from the Taylor series in s of the node equations, order by order: all terms of an order have one
 * sign, so that no digits cancel. What is infinite from some order on reaches only what lies behind it, from that order on.
 * @param entry node into which a unit of tracer is put
 */
export function moments(plant: Plant, entry: number): NodeMoments[] {
  const { nodes } = plant;
  const n = nodes.length;
  const gains = nodes.map(gainSeries);
  const equations = new NodeEquations(plant);
  equations.gainRe.set(gains.map((g) => g[0]));
  if (!equations.factor()) return nodes.map(() => momentsOf([0, 0, 0, 0], 0));
  const nothing = new Float64Array(n);
  const leaving: Float64Array[] = [];
  const entering: Float64Array[] = [];
  for (let k = 0; k < orders; k++) {
    const c = nodes.map((_, i) => {
      let sum = 0;
      for (let j = 1; j <= k; j++) if (Number.isFinite(gains[i][j])) sum += gains[i][j] * entering[k - j][i];
      return sum;
    });
    const put = k === 0 && nodes[entry].inflow > 0 ? 1 / nodes[entry].inflow : 0;
    c[entry] += put;
    const solved = Float64Array.from(c);
    equations.solve(solved, nothing.fill(0));
    const mean = equations.entering(solved);
    mean[entry] += put;
    leaving.push(solved);
    entering.push(mean);
  }
  const finite = finiteOrders(plant, gains, entering[0]);
  return nodes.map(({ inflow }, i) =>
    momentsOf(
      leaving.map((c) => c[i] * inflow),
      finite[i],
    ),
  );
}

/** How many orders are finite at each node: the fewest of its own and of what tracer passed before. */
function finiteOrders(plant: Plant, gains: readonly Float64Array[], passing: Float64Array): Uint8Array {
  const { from, to, flow } = plant;
  const finite = Uint8Array.from(gains, (g, i) => {
    const first = g.findIndex((x) => !Number.isFinite(x));
    return first < 0 || !(passing[i] > 0) ? orders : first;
  });
  if (finite.every((f) => f === orders)) return finite;
  for (let changed = true; changed; ) {
    changed = false;
    for (let k = 0; k < from.length; k++) {
      if (!(flow[k] > 0) || !(passing[from[k]] > 0) || finite[from[k]] >= finite[to[k]]) continue;
      finite[to[k]] = finite[from[k]];
      changed = true;
    }
  }
  return finite;
}

function momentsOf([a0, a1, a2, a3]: readonly number[], finite: number): NodeMoments {
  if (!(a0 > 0)) return { share: 0, mean: Number.NaN, variance: Number.NaN, skewness: undefined };
  const mean = finite > 1 ? -a1 / a0 : Number.POSITIVE_INFINITY;
  if (finite < 3) return { share: a0, mean, variance: Number.POSITIVE_INFINITY, skewness: undefined };
  const second = (2 * a2) / a0;
  const third = (-6 * a3) / a0;
  const raw = second - mean * mean;
  const variance = raw > 1e-12 * second ? raw : 0;
  const known = variance > 0 && finite > 3;
  const skewness = known ? (third - 3 * mean * second + 2 * mean ** 3) / variance ** 1.5 : undefined;
  return { share: a0, mean, variance, skewness };
}
