/** Where a unit of tracer is put in: all of it into one node, or its parts by node. */
export type Entry = number | ReadonlyMap<number, number>;

/** The part that goes into each node. */
export const partsOf = (entry: Entry): ReadonlyMap<number, number> =>
  typeof entry === "number" ? new Map([[entry, 1]]) : entry;
