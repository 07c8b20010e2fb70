import type { DimensionName } from "../units/dimension.js";

/** What may stand at a place of a document. From these come the JSON Schemas, the ajv validators and the manual. */
export type Shape =
  | { readonly is: "text" }
  /** A number with a unit or an expression; `dimension` one or several that are right there. */
  | { readonly is: "quantity"; readonly dimension: DimensionName | readonly DimensionName[] | "any" }
  | { readonly is: "whole"; readonly atLeast: number }
  | { readonly is: "choice"; readonly of: readonly string[] }
  | { readonly is: "name" }
  | { readonly is: "record"; readonly keys: Readonly<Record<string, KeyShape>> }
  /** A map with names of the author's own as keys. */
  | { readonly is: "named"; readonly each: Shape }
  | { readonly is: "list"; readonly of: Shape }
  /** `by: kind` picks the record by the value of that key. */
  | { readonly is: "variant"; readonly by: string; readonly of: Readonly<Record<string, VariantShape>> }
  | { readonly is: "either"; readonly of: readonly Shape[] };

export interface VariantShape {
  readonly says: string;
  readonly keys: Readonly<Record<string, KeyShape>>;
}

/** A key: what it says, what may stand there, an example as one would type it. */
export interface KeyShape {
  readonly shape: Shape;
  readonly says: string;
  readonly required?: boolean;
  readonly example?: string;
  readonly default?: string;
  /** Part of the language, refused by this version with its place. */
  readonly later?: boolean;
}
