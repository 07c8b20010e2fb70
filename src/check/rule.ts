import type { Network } from "../model/network.js";
import type { Report } from "../problems/report.js";
import type { Unit } from "../units/unit.js";
import type { Topology } from "./topology.js";

/** What rules may lean on. */
export interface Aids {
  readonly topology: Topology;
  readonly nearest: (name: string, candidates: readonly string[]) => string | undefined;
  /** Values of all names at their start values, SI. */
  readonly env: ArrayLike<number>;
  /** A value as the file would write it; `own` is the unit that it is written in, which counts where it is bare. */
  readonly say: (si: number, dimension: readonly number[], own?: Unit) => string;
}

/** One physical rule: looks at a resolved network and reports what breaks it. */
export type Rule = (network: Network, report: Report, aids: Aids) => void;
