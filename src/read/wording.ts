import type { Shape } from "../schema/shape.js";
import type { DimensionName } from "../units/dimension.js";
import type { Tree } from "./tree.js";

/** What a shape asks for, in words: "a flow with its unit or a map of names". */
export function wanted(shape: Shape): string {
  switch (shape.is) {
    case "text":
      return "a text";
    case "quantity":
      return shape.dimension === "any" ? "a value" : `a ${dimensionWords(shape.dimension)}`;
    case "whole":
      return "a whole number";
    case "choice":
      return shape.of.map((word) => `\`${word}\``).join(" or ");
    case "name":
      return "a name";
    case "named":
      return "a map of names and values";
    case "record":
    case "variant":
    case "depends":
      return "a map of keys and values";
    case "list":
      return "a list";
    case "nothing":
      return "`null`";
    case "later":
      return shape.says;
    case "either":
      return shape.of
        .filter((s) => s.is !== "later" && s.is !== "nothing")
        .map(wanted)
        .join(" or ");
  }
}

const dimensionWords = (dimension: DimensionName | readonly DimensionName[]): string =>
  typeof dimension === "string" ? dimensionWord(dimension) : dimension.map(dimensionWord).join(" or ");

/** As values' own messages call it. */
const dimensionWord = (dimension: DimensionName): string =>
  dimension === "ratio" ? "pure number or share (like 15 %)" : dimension;

/** What stands there, in words. */
export const found = (node: Tree): string =>
  node.type === "map" ? "a map" : node.type === "list" ? "a list" : node.empty ? "nothing" : `'${node.text}'`;
