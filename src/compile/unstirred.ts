import { Part, type Plant } from "./plant.js";

/** The first body of a plant that is not one mixed cell; undefined where all are. */
export function unstirred({ columns }: Plant): string | undefined {
  for (let node = 0; node < columns.size; node++) if (columns.part[node] !== Part.Cell) return columns.nameOf(node);
  return undefined;
}
