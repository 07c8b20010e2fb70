/** What a body makes of a small disturbance exp(s t) of what enters it, n x n, row-major; s in 1/s. */
export interface Response {
  /** s: how long what enters is on its way, as far as it matters. */
  readonly delay: number;
  /** True where some of it stays so long that nothing fades like exp(s t). */
  readonly lingers?: true;
  write(re: number, im: number, outRe: Float64Array, outIm: Float64Array): void;
}

/** The balances of a group about a steady state. */
export interface Disturbed {
  readonly count: number;
  readonly size: number;
  /** s, by node; 0 for what holds nothing. */
  readonly memory: ArrayLike<number>;
  /** d (what reaction makes in a space time) / dy of a cell, n x n; undefined where nothing reacts. */
  readonly slopes: readonly (Float64Array | undefined)[];
  /** Of bodies. */
  readonly responses: readonly (Response | undefined)[];
  /** By node: from which nodes of the group, with which share, and which component alone. */
  readonly inlets: readonly (readonly { readonly from: number; readonly share: number; readonly only?: number }[])[];
}
