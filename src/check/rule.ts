import type { Network } from "../model/network.js";
import type { Report } from "../problems/report.js";
import type { Topology } from "./topology.js";

/** What rules may lean on. */
export interface Aids {
  readonly topology: Topology;
  readonly nearest: (name: string, candidates: readonly string[]) => string | undefined;
  /** Values of all names at their start values, SI. */
  readonly env: ArrayLike<number>;
  /** A value as the file would write it. */
  readonly say: (si: number, dimension: readonly number[]) => string;
}

/** One physical rule: looks at a resolved network and reports what breaks it. */
export type Rule = (network: Network, report: Report, aids: Aids) => void;
