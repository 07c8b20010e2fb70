import type { Operation, Row } from "../study/operate.js";

export interface SweepOptions {
  readonly duty: string;
  readonly over?: readonly string[];
  readonly aim?: string;
  readonly by?: string;
  readonly between?: string;
  readonly confidence?: string;
  readonly trial?: readonly string[];
  readonly set?: readonly string[];
  readonly draws: number;
  readonly seed: number;
  readonly output?: string;
}

/** What is swept, and what is unsure about it. */
export interface Asked {
  readonly operation: Operation;
  readonly rows: readonly Row[];
  /** In words, what intervals carry; empty where nothing is unsure. */
  readonly carries: string;
}
