import { child, entriesOf } from "../read/tree.js";
import { type Instance, isPart } from "./part.js";

/** Parts of a document that cannot be used: why is told where that was found, and what leads to them is no news. */
export const lostParts = ({ tree, parts }: Pick<Instance, "tree" | "parts">): ReadonlySet<string> =>
  new Set(
    entriesOf(child(tree, "compartments")).flatMap(({ key, value }) =>
      value.type === "map" && isPart(value) && !parts.has(key.text) ? [key.text] : [],
    ),
  );
