import type { Input } from "./inputs.js";

/** Where to look for a value that meets an aim. SI. */
export interface AimRange {
  readonly input: Input;
  readonly from: number;
  readonly to: number;
  readonly log: boolean;
}

/** A stretch of the range in which the aim is met. SI. */
export interface Stretch {
  readonly from: number;
  readonly to: number;
}
