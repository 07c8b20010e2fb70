import type { Realization } from "../compartments/realization.js";
import { Part, type Plant } from "../compile/plant.js";
import { adjacency } from "../numerics/graph.js";

/** What a node is to an integrator. */
export type Sort = "cell" | "block" | "joint" | "delay" | "none";

/** A plant cut into stages: what lies between tubes that no loop holds is integrated together, one stage after the other. */
export interface Integrable {
  readonly plant: Plant;
  readonly sort: readonly Sort[];
  /** Equations of blocks. */
  readonly block: readonly (Realization | undefined)[];
  /** m3 of delay: of a tube, or before a block. */
  readonly lag: Float64Array;
  /** Is the node part of a circle? */
  readonly looped: Uint8Array;
  /** Stage in which what leaves a node is known. */
  readonly stage: Int32Array;
  readonly stages: number;
  /** Links into a node: `edges[start[i] .. start[i + 1]]`. */
  readonly into: ReturnType<typeof adjacency>;
  readonly out: ReturnType<typeof adjacency>;
}

/** A tube shorter than this part of the active volume is a junction. */
const shortest = 1e-9;

/**
 * @param realized equations of the blocks by node
 */
export function integrable(plant: Plant, realized: readonly (Realization | undefined)[]): Integrable {
  const { size, part, volume, inflow } = plant.columns;
  const into = adjacency(size, plant.to);
  const out = adjacency(size, plant.from);
  const tiny = shortest * plant.volume.active;
  const sort = Array.from({ length: size }, (_, i): Sort => {
    if (part[i] === Part.Cell && volume[i] > 0) return "cell"; // nothing need flow through it
    if (!(inflow[i] > 0)) return "none";
    if (part[i] === Part.Block) return "block";
    return part[i] === Part.Delay && volume[i] >= tiny ? "delay" : "joint";
  });
  const lag = Float64Array.from(sort, (s, i) => (s === "delay" ? volume[i] : (realized[i]?.delay ?? 0)));
  const looped = new Uint8Array(size);
  const stage = new Int32Array(size);
  for (const group of plant.groups) {
    const loop = group.length > 1 || plant.from.some((f, k) => f === group[0] && plant.to[k] === group[0]);
    const inside = new Set(group);
    let first = 0;
    for (const i of group) {
      for (let e = into.start[i]; e < into.start[i + 1]; e++) {
        const before = plant.from[into.edges[e]];
        if (!inside.has(before)) first = Math.max(first, stage[before]);
      }
    }
    for (const i of group) {
      looped[i] = loop ? 1 : 0;
      // A tube outside loops is read off what came before it; what follows it waits for that.
      stage[i] = first + (!loop && lag[i] > 0 ? 1 : 0);
    }
  }
  return {
    plant,
    sort,
    block: realized,
    lag,
    looped,
    stage,
    stages: stage.reduce((m, s) => Math.max(m, s), 0) + 1,
    into,
    out,
  };
}
