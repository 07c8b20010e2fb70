import type { Shape } from "../schema/shape.js";
import { nameDimension } from "../units/describe.js";
import { dimensions } from "../units/dimension.js";
import { code, or } from "./markdown.js";

/** What may stand at a place, in a few words: "a volume", "a list of 2 values", "`linear` or `log`". */
export function takes(shape: Shape): string {
  switch (shape.is) {
    case "text":
      return "text";
    case "quantity":
      return quantity(shape.dimension) + rangeOf(shape);
    case "whole":
      return `a whole number from ${shape.atLeast}${shape.atMost === undefined ? "" : ` to ${shape.atMost}`}`;
    case "choice":
      return or(shape.of.map(code));
    case "name":
      return "a name";
    case "nothing":
      return "`null`";
    case "record":
    case "variant":
    case "depends":
      return "a map";
    case "named":
      return `a map, each ${shape.keys === "free" ? "header" : "name"} with ${takes(shape.each)}`;
    case "list":
      return shape.length === undefined
        ? `a list, each ${takes(shape.of)}`
        : `a list of ${shape.length}, each ${takes(shape.of)}`;
    case "later":
      return `${shape.says} (${notYet})`;
    case "either":
      return either(shape.of);
  }
}

const rangeOf = ({ atLeast, above }: { readonly atLeast?: number; readonly above?: number }): string =>
  atLeast !== undefined ? `, at least ${atLeast}` : above !== undefined ? `, above ${above}` : "";

export const notYet = "not in this version";

/** One alternative after the other; what this version refuses comes last. */
function either(of: readonly Shape[]): string {
  const now = of.filter((s) => s.is !== "later").map(takes);
  const later = of.filter((s) => s.is === "later").map((s) => `; ${takes(s)}`);
  return `${or(now)}${later.join("")}`;
}

function quantity(dimension: Extract<Shape, { is: "quantity" }>["dimension"]): string {
  if (dimension === "any") return "a value";
  const names = typeof dimension === "string" ? [dimension] : dimension;
  return or(names.map((name) => nameDimension(dimensions[name]).replace(/ \(.*\)$/, "")));
}
