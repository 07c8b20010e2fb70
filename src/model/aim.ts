import type { Reported } from "./duty.js";
import type { Quantity } from "./value.js";

/** What a figure of a duty shall be: `conversion of A >= 95 %`. */
export interface Aim {
  readonly text: string;
  readonly line: Reported;
  /** `=`: the value itself, wherever it is reached. */
  readonly sign: ">=" | "<=" | "=";
  readonly target: Quantity;
}
