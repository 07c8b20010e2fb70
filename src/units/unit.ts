import type { Dimension } from "./dimension.js";

/** A unit as an engineer wrote it. value in SI = number * factor + offset; offset is 0 but for degC and degF. */
export interface Unit {
  readonly name: string;
  readonly factor: number;
  readonly offset: number;
  readonly dimension: Dimension;
}
