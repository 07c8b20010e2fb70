import { axialElements } from "../compartments/axial-elements.js";
import { type Realization, realizationAt } from "../compartments/realization.js";
import type { Stays } from "../compartments/stays.js";
import { Part, type Plant } from "../compile/plant.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";

/** How a body that is no cell is followed in time. */
export type Follow =
  /** Parcels that stay by themselves: all equally long, or as the body's kind shares their stays out. */
  | {
      readonly is: "parcels";
      /** m3, and how much of it must be displaced before anything leaves. */
      readonly volume: number;
      readonly lag: number;
      /** In units of the volume displaced; undefined: all are pushed out by as much. */
      readonly stays: Stays | undefined;
      /** How a jump that enters spreads, as far as that is known by equations. */
      readonly spread: Realization | undefined;
    }
  /** Mixed states that exchange; those after the first `flowing` are pockets. */
  | { readonly is: "states"; readonly realization: Realization; readonly flowing: number };

/**
 * Undefined for cells and joints.
 * @throws RefusedError where there is no way
 */
export function followOf(plant: Plant, node: number): Follow | undefined {
  const { part, volume, inflow } = plant.columns;
  if (part[node] === Part.Delay) {
    return { is: "parcels", volume: volume[node], lag: volume[node], stays: undefined, spread: undefined };
  }
  const block = plant.columns.blockAt(node);
  if (!block) return undefined;
  const refuse = (what: string): never => {
    const name = plant.columns.nameOf(node);
    const { at } = plant.network.compartments.find((body) => body.name === name) ?? plant.network;
    throw new RefusedError([problem("not-yet", at, { what: `a transient of '${name}', ${what},` })]);
  };
  const { mixing, pockets } = block;
  if (mixing.is === "dispersed") {
    // Reaction is between the two ends only: closed ends, whatever they are for tracer.
    const unit = axialElements(mixing.peclet, false);
    if (!unit || !(block.volume > 0)) return refuse("whose Péclet number is too high for its equations in time");
    return { is: "states", realization: realizationAt(unit, block.volume, pockets), flowing: unit.input.length };
  }
  if (pockets) return refuse("a body without back-mixing beside stagnant pockets");
  const held = block.volume;
  if (mixing.is === "plug") return { is: "parcels", volume: held, lag: held, stays: undefined, spread: undefined };
  const { stays } = mixing;
  // In a circle what enters is known only up to now: it takes a body that nobody leaves at once.
  const looped = plant.groups.some((group) => group.length > 1 && group.includes(node));
  if (looped && stays.from === 0) return refuse("a body that parcels may leave at once, within a recycle");
  return { is: "parcels", volume: held, lag: stays.from * held, stays, spread: block.realize(inflow[node]) };
}
