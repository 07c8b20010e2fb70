import type { TimeOptions } from "./times.js";

/** The options of `simulate`, as written. */
export interface SimulateOptions extends TimeOptions {
  readonly pulse?: string;
  readonly step?: string;
  readonly trial?: string;
  readonly duty?: string;
  readonly transient?: true;
  readonly states?: string;
  readonly funnel?: true;
  readonly draws?: number;
  readonly delay?: string;
  readonly at?: readonly string[];
  readonly follows?: string;
  readonly set?: readonly string[];
  readonly engine: "auto" | "exact" | "ode" | "laplace" | "chebyshev" | "krylov";
  readonly verify?: true;
  readonly output?: string;
  readonly ages?: string;
  readonly along?: string;
}
