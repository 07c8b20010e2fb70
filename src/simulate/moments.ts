import { Part, type Plant } from "../compile/plant.js";
import { adjacency } from "../numerics/graph.js";
import { factor, type Lu, solve } from "../numerics/lu.js";

/** Of the residence time at a node's outflow, for a unit of tracer put in: exact, no curve is summed. */
export interface NodeMoments {
  /** Share of the tracer that leaves through the node. */
  readonly share: number;
  /** s; s2; dimensionless. Each normalised by the share. Null where nothing arrives or the variance is 0. */
  readonly mean: number;
  readonly variance: number;
  readonly skewness: number | undefined;
}

const orders = 4;

/**
 * Moments at every node from the Taylor series in s of the node equations (area, mean, variance, third moment).
 * A cell: (inflow + s V) c = entering; a tube: c = exp(-s tau) entering / inflow; groups in flow order, circles by a small solve.
 * @param entry node into which a unit of tracer is put
 */
export function moments(plant: Plant, entry: number): NodeMoments[] {
  const { nodes, from, flow } = plant;
  const into = adjacency(nodes.length, plant.to);
  // series[k][i]: coefficient of s^k of the concentration leaving node i
  const series = Array.from({ length: orders }, () => new Float64Array(nodes.length));
  // The s-powers of what enters a tube are needed for those of what leaves it.
  const enters = Array.from({ length: orders }, () => new Float64Array(nodes.length));
  for (const group of plant.groups) {
    const lu = groupMatrix(plant, group, into);
    const rhs = new Float64Array(group.length);
    const local = new Set(group);
    for (let k = 0; k < orders; k++) {
      group.forEach((i, row) => {
        const { inflow, part, volume } = nodes[i];
        let sum = i === entry && k === 0 ? 1 : 0;
        for (let e = into.start[i]; e < into.start[i + 1]; e++) {
          const link = into.edges[e];
          if (!local.has(from[link])) sum += flow[link] * series[k][from[link]];
        }
        if (part === Part.Cell) sum -= k > 0 ? volume * series[k - 1][i] : 0;
        else if (volume > 0 && inflow > 0) sum += inflow * delayed(enters, i, k, volume / inflow);
        rhs[row] = inflow > 0 ? sum / inflow : 0;
      });
      if (lu) solve(lu, rhs);
      group.forEach((i, row) => {
        series[k][i] = rhs[row];
      });
      group.forEach((i) => {
        if (nodes[i].part === Part.Cell || nodes[i].volume === 0) return;
        // c = entering + older powers, so entering = c - older powers
        enters[k][i] = series[k][i] - delayed(enters, i, k, nodes[i].volume / nodes[i].inflow);
      });
    }
  }
  return nodes.map((node, i) => fromSeries(series.map((s) => s[i] * node.inflow)));
}

/** Contribution of lower powers of s to power k behind a delay: sum over j >= 1 of (-tau)^j / j! entering_(k-j). */
function delayed(enters: readonly Float64Array[], i: number, k: number, tau: number): number {
  let sum = 0;
  let factor = 1;
  for (let j = 1; j <= k; j++) {
    factor *= -tau / j;
    sum += factor * enters[k - j][i];
  }
  return sum;
}

/** I - (flows inside the group) / inflow; undefined for a single node without a link to itself. */
function groupMatrix(plant: Plant, group: Int32Array, into: ReturnType<typeof adjacency>): Lu | undefined {
  const n = group.length;
  const local = new Map([...group].map((node, i) => [node, i]));
  const matrix = new Float64Array(n * n);
  let linked = false;
  group.forEach((i, row) => {
    matrix[row * n + row] += 1;
    for (let e = into.start[i]; e < into.start[i + 1]; e++) {
      const k = into.edges[e];
      const j = local.get(plant.from[k]);
      if (j === undefined || plant.nodes[i].inflow === 0) continue;
      matrix[row * n + j] -= plant.flow[k] / plant.nodes[i].inflow;
      linked = true;
    }
  });
  if (!linked) return undefined;
  const lu = factor(matrix, n);
  return lu === "singular" ? undefined : lu;
}

function fromSeries([a0, a1, a2, a3]: number[]): NodeMoments {
  if (!(a0 > 0)) return { share: 0, mean: Number.NaN, variance: Number.NaN, skewness: undefined };
  const mean = -a1 / a0;
  const second = (2 * a2) / a0;
  const third = (-6 * a3) / a0;
  const raw = second - mean * mean;
  const variance = raw > 1e-12 * second ? raw : 0;
  const skewness = variance > 0 ? (third - 3 * mean * second + 2 * mean ** 3) / variance ** 1.5 : undefined;
  return { share: a0, mean, variance, skewness };
}
