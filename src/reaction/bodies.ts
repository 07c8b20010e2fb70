import type { Mixing } from "../compartments/block.js";
import { Part, type Plant } from "../compile/plant.js";
import { dispersedPass, type Pass } from "./dispersion.js";
import type { Reactions } from "./kinetics.js";
import { passSegregated, passTube } from "./tube.js";
import { alongWay } from "./way.js";

/** How a mixture reacts on its way through a body, by what the body's kind declares. */
function passOf(mixing: Mixing, reactions: Reactions, ...way: [volume: number, pockets: Pockets, flow: number]): Pass {
  const parcels = (): ReturnType<typeof alongWay> => alongWay(reactions, ...way);
  switch (mixing.is) {
    case "plug": {
      const along = parcels();
      return (y, sensitivity) => passTube(along, 1, y, sensitivity);
    }
    case "segregated": {
      const along = parcels();
      return (y, sensitivity) => passSegregated(along, mixing.stays, y, sensitivity);
    }
    case "dispersed":
      return dispersedPass(alongWay(reactions, ...way, reactions.cell), mixing.peclet);
  }
}

type Pockets = Parameters<typeof alongWay>[2];

/**
 * What a node makes of the mixture that enters it, where it is a body that is not mixed throughout; undefined for cells and
 * joints.
 */
export function bodyAt({ columns }: Plant, node: number, reactions: Reactions): Pass | undefined {
  const { part, volume, inflow } = columns;
  if (part[node] === Part.Delay) return passOf({ is: "plug" }, reactions, volume[node], undefined, inflow[node]);
  const block = columns.blockAt(node);
  return block && passOf(block.mixing, reactions, block.volume, block.pockets, inflow[node]);
}

/** A body whose contents feed back on one another: it may have several states by itself. */
export function hasInside({ columns }: Plant, node: number): boolean {
  const block = columns.blockAt(node);
  return block !== undefined && (block.mixing.is === "dispersed" || block.pockets !== undefined);
}
