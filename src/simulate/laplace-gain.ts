import type { Block } from "../compartments/block.js";
import { Part, type Plant, type PlantNode } from "../compile/plant.js";
import { type Complex, complex } from "../numerics/complex.js";
import { gain } from "../transfer/gain.js";

/** A node as the inversion needs it: what passes at once, what spreads, and how late. */
export interface Passing {
  /** s; 0 where nothing is delayed. */
  readonly delay: number;
  /** Share of an instant amount that leaves undispersed. */
  readonly direct: number;
  /** The undelayed gain without its undispersed part. */
  spread(s: Complex): Complex;
  /** The whole gain, delay and all. */
  whole(s: Complex): Complex;
}

/** A tube shorter than this part of the mean time is a junction. */
const shortest = 1e-9;
const none = complex.of(0);

/** @param meanTime s, of the plant */
export function passings(plant: Plant, meanTime: number): Passing[] {
  return plant.nodes.map((node) => passing(node, shortest * meanTime));
}

function passing(node: PlantNode, shortestDelay: number): Passing {
  const { part, volume, inflow, block } = node;
  const whole = (s: Complex): Complex => gain(node, s);
  const nothing = { delay: 0, direct: 0, spread: () => none, whole: () => none };
  if (!(inflow > 0)) return nothing;
  switch (part) {
    case Part.Cell:
      return { delay: 0, direct: 0, spread: whole, whole };
    case Part.Joint:
      return { delay: 0, direct: 1, spread: () => none, whole };
    case Part.Delay: {
      const delay = volume / inflow;
      if (delay < shortestDelay) return { delay: 0, direct: 1, spread: () => none, whole: () => complex.of(1) };
      return { delay, direct: 1, spread: () => none, whole };
    }
    case Part.Block:
      return blockPassing(block as Block, inflow, shortestDelay);
  }
}

function blockPassing(block: Block, inflow: number, shortestDelay: number): Passing {
  const delay = block.delay(inflow);
  const late = delay >= shortestDelay;
  return {
    delay: late ? delay : 0,
    direct: block.direct(inflow),
    spread: (s) => block.spread(s, inflow),
    whole: (s) => (late ? block.transfer(s, inflow) : block.undelayed(s, inflow)),
  };
}
