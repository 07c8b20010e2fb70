import { child, entriesOf, itemsOf, type MapNode } from "../read/tree.js";
import type { Span } from "../text/source.js";

/** A name that a document declares, and where. */
export interface DeclaredName {
  readonly name: string;
  readonly at: Span;
  readonly what: "constant" | "parameter" | "feed" | "compartment" | "outlet" | "species";
}

const maps = {
  constants: "constant",
  parameters: "parameter",
  feeds: "feed",
  compartments: "compartment",
  species: "species",
} as const;

/** All names that a document declares itself, in file order. Feeds of a duty or a trial are no declarations. */
export function declaredNames(tree: MapNode | undefined): readonly DeclaredName[] {
  const own = child(tree, "network") ? Object.entries(maps) : Object.entries(maps).filter(([key]) => key !== "feeds");
  return [
    ...own.flatMap(([key, what]) =>
      entriesOf(child(tree, key)).map((e): DeclaredName => ({ name: e.key.text, at: e.key.at, what })),
    ),
    ...itemsOf(child(tree, "outlets")).flatMap((i): DeclaredName[] =>
      i.type === "scalar" ? [{ name: i.text, at: i.at, what: "outlet" }] : [],
    ),
  ];
}
