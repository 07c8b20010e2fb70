/** What a plant holds at time 0, scaled. */
export type Start =
  /** In balance with what was fed before: the mixture that leaves each node. */
  | { readonly is: "steady"; leaving(node: number): Float64Array }
  /** Each body holds one mixture throughout. */
  | { readonly is: "contents"; holding(node: number): Float64Array };
