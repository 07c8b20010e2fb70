import type { Plant } from "../compile/plant.js";
import { stronglyConnected } from "../numerics/graph.js";
import { factor, solve } from "../numerics/lu.js";
import type { Sort } from "../simulate/integrable.js";

/** What enters a node, as parts of what leaves nodes that hold something and of what feeds bring; parts add to 1. */
export type Blend = ReadonlyMap<number, number>;

/**
 * Junctions hold nothing: what enters any node is a blend of what leaves cells, tubes and other bodies, and of feeds. A source
 * is a node's number, or the number of nodes plus that of a feed.
 */
export function blends(plant: Plant, sort: readonly Sort[]): (node: number) => Blend {
  const { size, inflow } = plant.columns;
  const into: { from: number; flow: number }[][] = Array.from({ length: size }, () => []);
  plant.to.forEach((to, k) => {
    if (plant.flow[k] > 0) into[to].push({ from: plant.from[k], flow: plant.flow[k] });
  });
  plant.feeds.forEach(({ node, flow }, k) => {
    if (flow > 0) into[node].push({ from: size + k, flow });
  });
  const joint = (i: number): boolean => i < size && sort[i] === "joint";
  const known = new Map<number, Blend>();
  const add = (sum: Map<number, number>, from: number, part: number): void => {
    if (!joint(from)) sum.set(from, (sum.get(from) ?? 0) + part);
    else for (const [source, w] of known.get(from) ?? []) sum.set(source, (sum.get(source) ?? 0) + part * w);
  };
  const alone = (node: number): Blend => {
    const sum = new Map<number, number>();
    for (const { from, flow } of into[node]) add(sum, from, flow / inflow[node]);
    return sum;
  };
  const kept = [...plant.from.keys()].filter((k) => joint(plant.from[k]) && joint(plant.to[k]) && plant.flow[k] > 0);
  const graph = { size, from: kept.map((k) => plant.from[k]), to: kept.map((k) => plant.to[k]) };
  for (const group of stronglyConnected(graph)) {
    if (!joint(group[0])) continue;
    const members = new Set(group);
    if (!into[group[0]].some(({ from }) => members.has(from)) && group.length === 1)
      known.set(group[0], alone(group[0]));
    else circle(Array.from(group), members);
  }
  return (node) => known.get(node) ?? alone(node);

  /** Junctions that feed one another: (1 - shares) blend = what comes from elsewhere. */
  function circle(group: readonly number[], members: ReadonlySet<number>): void {
    const n = group.length;
    const place = new Map(group.map((node, i) => [node, i]));
    const matrix = new Float64Array(n * n);
    const outside = group.map((node, i) => {
      matrix[i * n + i] += 1;
      const sum = new Map<number, number>();
      for (const { from, flow } of into[node]) {
        if (members.has(from)) matrix[i * n + (place.get(from) as number)] -= flow / inflow[node];
        else add(sum, from, flow / inflow[node]);
      }
      return sum;
    });
    const lu = factor(matrix, n);
    const sums = group.map(() => new Map<number, number>());
    for (const source of new Set(outside.flatMap((sum) => [...sum.keys()]))) {
      const column = Float64Array.from(outside, (sum) => sum.get(source) ?? 0);
      if (lu !== "singular") solve(lu, column);
      column.forEach((w, i) => {
        if (w !== 0) sums[i].set(source, w);
      });
    }
    group.forEach((node, i) => {
      known.set(node, sums[i]);
    });
  }
}
