import type { Plant } from "../compile/plant.js";
import { stronglyConnected } from "../numerics/graph.js";
import type { FeedExchanger } from "../reaction/exchangers.js";

/** A feed that what leaves warms before it enters: links of their own, behind those of the plant, that carry the temperature alone. */
export interface Warming {
  /** Link number, and the part of what enters the feed's node that it makes of the temperature. */
  readonly link: number;
  readonly gain: number;
  /** Number of the feed, and the outlet's node. */
  readonly feed: number;
  readonly from: number;
}

/** The plant with a link for every exchanger, and circles closed through them; the plant itself where there is none. */
export function warmedPlant(
  plant: Plant,
  exchangers: readonly FeedExchanger[],
): { readonly plant: Plant; readonly warmings: readonly Warming[] } {
  if (exchangers.length === 0) return { plant, warmings: [] };
  const nodes = exchangers.map((e) => plant.feeds[e.feed].node);
  const outlets = exchangers.map((e) => plant.outlets[e.outlet].node);
  const from = Int32Array.of(...plant.from, ...outlets);
  const to = Int32Array.of(...plant.to, ...nodes);
  const flow = Float64Array.of(...plant.flow, ...exchangers.map((e) => e.gain * plant.feeds[e.feed].flow));
  const groups = stronglyConnected({ size: plant.columns.size, from, to });
  return {
    plant: { ...plant, nodes: plant.nodes, from, to, flow, groups },
    warmings: exchangers.map(({ feed, gain }, k) => ({ link: plant.flow.length + k, gain, feed, from: outlets[k] })),
  };
}
