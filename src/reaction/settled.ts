import type { Walk } from "./walk.js";

/** What crosses the boundary of the plant at one place. */
export interface Port {
  readonly name: string;
  /** m3/s. */
  readonly flow: number;
  readonly concentrations: Float64Array;
  /** K, where heat is balanced. */
  readonly temperature: number | undefined;
}

/** A plant whose balances were solved, scaled. */
export type Settled = Pick<Walk, "y" | "inflow" | "into" | "fed" | "residual" | "worst">;
