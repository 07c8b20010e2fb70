import type { Problem } from "../problems/problem.js";
import type { Unit } from "../units/unit.js";

/** One file of a library, looked over. */
export interface Verified {
  readonly file: string;
  readonly kind: string | undefined;
  readonly problems: readonly Problem[];
  readonly statements: readonly Statement[];
}

/** One of the `checks:` of a network, run. Values in SI. */
export interface Statement {
  /** `mean-time product equals 100 min`. */
  readonly name: string;
  readonly value: number;
  readonly equals: number;
  readonly unit: Unit;
  /** Relative to `equals`: what is allowed, and what it is off by (NaN where that makes no sense). */
  readonly within: number;
  readonly off: number;
  readonly holds: boolean;
  readonly line: number;
}
