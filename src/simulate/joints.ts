import type { Plant } from "../compile/plant.js";
import { factor, solve } from "../numerics/lu.js";

/** What a joint's outflow is made of: node -> weight. Sources are cells, tubes' outlets and, at weight 1/flow, tracer put in. */
export type Blend = ReadonlyMap<number, number>;

/**
 * Joints hold nothing, so their concentration is a fixed blend of the cells and tubes around them: found once, by
 * substitution in flow order and a small solve where joints form a circle.
 * @returns per node: its blend (joints only), weights by source node; a joint with its own tracer input has itself as source
 */
export function jointBlends(plant: Plant): (Blend | undefined)[] {
  const { nodes, from, flow } = plant;
  const n = nodes.length;
  const { joints, into } = plant.structure;
  const blends: (Blend | undefined)[] = new Array(n).fill(undefined);
  for (const group of joints) {
    const local = new Map([...group].map((node, i) => [node, i]));
    const size = group.length;
    const matrix = new Float64Array(size * size);
    const sums: Map<number, number>[] = [];
    group.forEach((node, i) => {
      matrix[i * size + i] = 1;
      const sum = new Map<number, number>([[node, 1]]);
      const total = nodes[node].inflow;
      for (let e = into.start[node]; e < into.start[node + 1]; e++) {
        const k = into.edges[e];
        const weight = total > 0 ? flow[k] / total : 0;
        const j = local.get(from[k]);
        if (j !== undefined) matrix[i * size + j] -= weight;
        else for (const [s, w] of blends[from[k]] ?? [[from[k], 1]]) sum.set(s, (sum.get(s) ?? 0) + weight * w);
      }
      sums.push(sum);
    });
    const lu = size > 1 || matrix[0] !== 1 ? factor(matrix, size) : undefined;
    if (lu === "singular") {
      // No flow comes out of such a circle; flows were balanced before, so nothing enters it either.
      for (const node of group) blends[node] = new Map();
      continue;
    }
    const sources = new Set(sums.flatMap((s) => [...s.keys()]));
    const solved = sums.map(() => new Map<number, number>());
    for (const s of sources) {
      const column = Float64Array.from(sums, (sum) => sum.get(s) ?? 0);
      if (lu) solve(lu, column);
      column.forEach((w, i) => {
        if (w !== 0) solved[i].set(s, w);
      });
    }
    group.forEach((node, i) => {
      blends[node] = solved[i];
    });
  }
  return blends;
}
