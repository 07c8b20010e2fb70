import type { Plant } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import { factor, solve } from "../numerics/lu.js";
import type { Blend } from "./joints.js";

/** How the blends of joints move with a plant: the derivative of the same equations. Per node; nothing where none moves. */
export function jointBlendSlopes(
  plant: Plant,
  { flow: dFlow, inflow: dInflow }: PlantSlope,
  blends: readonly (Blend | undefined)[],
): (Blend | undefined)[] {
  const { nodes, from, flow } = plant;
  const { joints, into } = plant.structure;
  const slopes: (Blend | undefined)[] = new Array(nodes.length).fill(undefined);
  for (const group of joints) {
    const size = group.length;
    const local = new Map([...group].map((node, i) => [node, i]));
    const matrix = new Float64Array(size * size);
    const sums = [...group].map((node, i): Map<number, number> => {
      matrix[i * size + i] = 1;
      const sum = new Map<number, number>();
      const total = nodes[node].inflow;
      for (let e = into.start[node]; e < into.start[node + 1] && total > 0; e++) {
        const k = into.edges[e];
        const weight = flow[k] / total;
        const moved = (dFlow[k] - weight * dInflow[node]) / total;
        if (moved !== 0) for (const [s, w] of blends[from[k]] ?? [[from[k], 1]]) gather(sum, s, moved * w);
        const j = local.get(from[k]);
        if (j !== undefined) matrix[i * size + j] -= weight;
        else for (const [s, w] of slopes[from[k]] ?? []) gather(sum, s, weight * w);
      }
      return sum;
    });
    const lu = size > 1 || matrix[0] !== 1 ? factor(matrix, size) : undefined;
    if (lu === "singular") continue;
    if (lu) solveColumns(sums, (column) => solve(lu, column));
    group.forEach((node, i) => {
      if (sums[i].size > 0) slopes[node] = sums[i];
    });
  }
  return slopes;
}

function gather(sum: Map<number, number>, key: number, value: number): void {
  sum.set(key, (sum.get(key) ?? 0) + value);
}

function solveColumns(sums: Map<number, number>[], solveOne: (column: Float64Array) => void): void {
  for (const s of new Set(sums.flatMap((sum) => [...sum.keys()]))) {
    const column = Float64Array.from(sums, (sum) => sum.get(s) ?? 0);
    solveOne(column);
    column.forEach((w, i) => {
      sums[i].set(s, w);
    });
  }
}
