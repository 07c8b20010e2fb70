import { unknownKind } from "../compartments/unknown.js";
import type { Compartment, Stream } from "../model/network.js";
import type { Value } from "../model/value.js";
import { child, entriesOf, type MapNode, type Tree } from "../read/tree.js";
import type { Span } from "../text/source.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { one } from "../units/unit.js";

/** What stands for a value that could not be found, once the reason is reported: NaN, and nobody is told again. */
export const unknownValue = (at: Span, dimension: Dimension = dimensions.ratio): Value => ({
  at,
  dimension,
  unit: undefined,
  expression: { type: "number", value: Number.NaN, unit: one, at: { from: 0, to: 0 } },
  uses: [],
  of: () => Number.NaN,
  sd: undefined,
  unknown: true,
});

/** A share or flow of which only the destination is known. */
export const unknownStream = (to: string, at: Span): Stream => ({
  to,
  at,
  split: { is: "share", value: unknownValue(at) },
});

/** A stream of which not even that is known. */
export const nowhere = (at: Span): Stream => ({ ...unknownStream("", at), unknown: true });

/** A body whose kind, file or tables cannot be used, with the streams out of it. */
export function unknownBody(name: string, at: Span, node: MapNode): Compartment {
  const to = child(node, "to");
  return {
    name,
    at,
    kind: unknownKind,
    values: {},
    counts: {},
    words: {},
    streams: destinations(to, node).map((s) => unknownStream(s.text, s.at)),
    exchanges: [],
    toAt: to?.at ?? at,
  };
}

/** All names that a `to:` may lead to: of a split its keys, of outlets' ways what each leads to. */
function destinations(to: Tree | undefined, { entries }: MapNode): { text: string; at: Span }[] {
  if (to?.type === "scalar") return to.empty ? [] : [to];
  const byOutlet = entries.some((e) => e.key.text === "use" || e.key.text === "volumes");
  return entriesOf(to).flatMap(({ key, value }) =>
    !byOutlet ? [key] : value.type === "map" ? value.entries.map((e) => e.key) : value.type === "scalar" ? [value] : [],
  );
}
