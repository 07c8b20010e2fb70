import type { Plant } from "../compile/plant.js";
import type { Blend } from "./joints.js";

/** A concentration as a sum over states, and what of it passes undispersed. */
export interface Draft {
  weights: Map<number, number>;
  direct: number;
}

/** All tracer that has passed tubes of one total delay. */
export interface Copy {
  readonly delay: number;
  /** Tube outlets through which tracer comes into this copy. */
  readonly seeds: Map<number, Draft>;
  readonly outflow: Map<number, Draft>;
  readonly inlets: Map<number, Draft>;
  /** Nodes that tracer gets to here, in order. */
  readonly reached: readonly number[];
  /** The seeds that what enters a tube here becomes; none where it comes too late to matter. */
  readonly goes: Map<number, Map<number, Draft>>;
}

/** How a plant was unrolled: what was decided on the way, for whoever goes it again. */
export interface UnrollPlan {
  readonly plant: Plant;
  /** The part of the tracer that is put into each node. */
  readonly put: ReadonlyMap<number, number>;
  readonly blends: readonly (Blend | undefined)[];
  readonly copies: readonly Copy[];
}

/** sum += factor * part */
export function add(sum: Draft, part: Draft, factor: number): void {
  if (factor === 0) return;
  sum.direct += factor * part.direct;
  for (const [s, w] of part.weights) sum.weights.set(s, (sum.weights.get(s) ?? 0) + factor * w);
}
