import { orders } from "../compartments/block.js";
import type { Plant } from "../compile/plant.js";
import { gainColumns } from "../transfer/gain.js";
import { SteadyEquations } from "../transfer/steady-equations.js";
import { type Entry, partsOf } from "./entry.js";

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
 * @param entry where a unit of tracer is put in
 * @param nodes where they are wanted; default: everywhere
 */
export function moments(plant: Plant, entry: Entry, nodes?: readonly number[]): NodeMoments[] {
  const { size, inflow } = plant.columns;
  const gains = gainColumns(plant);
  const equations = new SteadyEquations(plant);
  const leaving: Float64Array[] = [];
  const entering: Float64Array[] = [];
  for (let k = 0; k < orders; k++) {
    const c = new Float64Array(size);
    for (let j = 1; j <= k; j++) addFinite(c, gains[j], entering[k - j]);
    const put = k === 0 ? putIn(inflow, entry) : [];
    for (const [node, level] of put) c[node] += level;
    if (!equations.solve(c)) return Array.from(nodes ?? c, () => momentsOf(0, 0, 0, 0, 0));
    const mean = equations.entering(c);
    for (const [node, level] of put) mean[node] += level;
    leaving.push(c);
    entering.push(mean);
  }
  const finite = finiteOrders(plant, gains, entering[0]);
  const [c0, c1, c2, c3] = leaving;
  const at = (i: number): NodeMoments => {
    const q = inflow[i];
    return momentsOf(c0[i] * q, c1[i] * q, c2[i] * q, c3[i] * q, finite[i]);
  };
  return nodes ? nodes.map(at) : Array.from(inflow, (_, i) => at(i));
}

/** What a unit of tracer adds to the mean of what enters each node; nothing where nothing flows. */
export const putIn = (inflow: ArrayLike<number>, entry: Entry): [node: number, level: number][] =>
  [...partsOf(entry)].flatMap(([node, part]): [number, number][] =>
    inflow[node] > 0 ? [[node, part / inflow[node]]] : [],
  );

/** c += gain x, where the gain is finite. */
function addFinite(c: Float64Array, gain: Float64Array, x: Float64Array): void {
  for (let i = 0; i < c.length; i++) if (Number.isFinite(gain[i])) c[i] += gain[i] * x[i];
}

/** How many orders are finite at each node: the fewest of its own and of what tracer passed before. */
function finiteOrders(plant: Plant, gains: readonly Float64Array[], passing: Float64Array): Uint8Array {
  const { from, to, flow } = plant;
  const finite = new Uint8Array(passing.length).fill(orders);
  for (let k = orders - 1; k > 0; k--) {
    for (let i = 0; i < finite.length; i++) if (!Number.isFinite(gains[k][i]) && passing[i] > 0) finite[i] = k;
  }
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

/** Where nothing arrives. */
export const noMoments: NodeMoments = { share: 0, mean: Number.NaN, variance: Number.NaN, skewness: undefined };

function momentsOf(a0: number, a1: number, a2: number, a3: number, finite: number): NodeMoments {
  if (!(a0 > 0)) return noMoments;
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
