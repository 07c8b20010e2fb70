/** A JSON Schema, or a part of one. */
export interface JsonSchema {
  [keyword: string]: Json;
}
export type Json = string | number | boolean | null | readonly Json[] | { readonly [key: string]: Json };
