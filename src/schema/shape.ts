import type { DimensionName } from "../units/dimension.js";

/** What may stand at a place of a document. From these come the JSON Schemas, the ajv validators and the manual. Plain data. */
export type Shape =
  | { readonly is: "text" }
  /** A number with a unit or an expression; `dimension` one or several that are right there. */
  | {
      readonly is: "quantity";
      readonly dimension: DimensionName | readonly DimensionName[] | "any";
      /** SI. Held to when the network is balanced, for a value may be made of others. */
      readonly atLeast?: number;
      readonly above?: number;
    }
  | { readonly is: "whole"; readonly atLeast: number; readonly atMost?: number }
  /** `later`: words of the language that this version refuses. */
  | { readonly is: "choice"; readonly of: readonly string[]; readonly later?: readonly string[] }
  /** A name of the author's own, used as a value; dots reach into parts and repeats. */
  | { readonly is: "name" }
  | RecordShape
  /** A map with names of the author's own as keys; `free` where a key may be any text, a header of a table say. */
  | {
      readonly is: "named";
      readonly each: Shape;
      readonly keys?: "names" | "dotted" | "free";
      /** Keys with a meaning of their own that this version refuses. */
      readonly later?: Readonly<Record<string, string>>;
    }
  /** `length`: exactly so many. */
  | { readonly is: "list"; readonly of: Shape; readonly length?: number }
  /** `by: kind` picks the record by the value of that key. */
  | { readonly is: "variant"; readonly by: string; readonly of: Readonly<Record<string, VariantShape>> }
  /** Told apart by what stands there: a value, a map, a list. At most one alternative of each sort. */
  | { readonly is: "either"; readonly of: readonly Shape[] }
  /** Told apart by whether a key is there. */
  | { readonly is: "depends"; readonly on: string; readonly present: RecordShape; readonly absent: RecordShape }
  /** `null`: in a change, "remove this". */
  | { readonly is: "nothing" }
  /** A form that the language has and this version refuses. */
  | { readonly is: "later"; readonly sort: Sort; readonly says: string };

/** The three sorts of node that YAML knows. */
export type Sort = "value" | "map" | "list";

export interface RecordShape {
  readonly is: "record";
  readonly keys: Readonly<Record<string, KeyShape>>;
  /** Exactly one of these keys must be there. */
  readonly oneOf?: readonly string[];
}

export interface VariantShape {
  readonly says: string;
  readonly keys: Readonly<Record<string, KeyShape>>;
  /** Part of the language, refused by this version with its place. */
  readonly later?: boolean;
}

/** A key: what it says, what may stand there, an example as one would type it. */
export interface KeyShape {
  readonly shape: Shape;
  readonly says: string;
  readonly required?: boolean;
  readonly example?: string;
  /** What an editor puts at this key of a new entry; without it, the example where the key must be there. */
  readonly snippet?: string;
  readonly default?: string;
  /** Part of the language, refused by this version with its place. */
  readonly later?: boolean;
  /** A key that must stand beside it. */
  readonly needs?: string;
  /** Right elsewhere, never here: why, and what to write instead. Refused with its place. */
  readonly elsewhere?: { readonly says: string; readonly fix: string };
}

/** The five kinds of document, by the key that begins them. */
export const documentKinds = ["network", "trial", "chemistry", "duty", "study"] as const;
export type DocumentKind = (typeof documentKinds)[number];

/** The sort of node that a shape asks for; undefined where it takes several. */
export function sortOf(shape: Shape): Sort | undefined {
  switch (shape.is) {
    case "either":
      return undefined;
    case "record":
    case "named":
    case "variant":
    case "depends":
      return "map";
    case "list":
      return "list";
    case "later":
      return shape.sort;
    default:
      return "value";
  }
}

/** What may stand at the key that decides a variant. */
export function decidingShape({ of }: Extract<Shape, { is: "variant" }>): Extract<Shape, { is: "choice" }> {
  const words = Object.keys(of);
  return { is: "choice", of: words.filter((w) => !of[w].later), later: words.filter((w) => of[w].later) };
}
