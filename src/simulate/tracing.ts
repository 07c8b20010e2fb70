import type { Plant } from "../compile/plant.js";
import type { Entry } from "./entry.js";
import type { Drive } from "./linear-system.js";
import type { Balance, Seen } from "./respond.js";

/** What to look at: the outflow of a node at clock times, s, ascending. */
export interface NodeLook {
  readonly node: number;
  readonly times: Float64Array;
  /** s: seen through a first-order detector that held nothing before. */
  readonly lag?: number;
  /** Default true; false leaves `integral` at 0. */
  readonly integral?: boolean;
}

/** Tracer put in at one place of a plant, as one engine follows it, whatever was put in. */
export interface Tracing {
  /** Concentrations (per unit of what the drive counts) and their integrals. */
  see(drive: Drive, looks: readonly NodeLook[]): { seen: Seen[]; stopped: string | undefined };
  /** Delays after which tracer leaves a node, and how much of an instant unit then leaves undispersed, 1/m3 s. */
  passagesAt(node: number): readonly { readonly delay: number; readonly direct: number }[];
  /** Where all tracer is at a time. */
  balance(drive: Drive, until: number): Balance;
  /** True where passes were given up because there were too many. */
  readonly truncated: boolean;
}

/** Told now and then how much of the work is done; true ends it. */
export type WatchTracing = (done: number, of: number) => boolean;

/** A way to follow tracer through any plant that it carries. */
export interface TracerWay {
  readonly name: string;
  /**
   * @param entry   where tracer is put in
   * @param horizon s; nothing later is asked
   */
  trace(plant: Plant, entry: Entry, horizon: number, watch?: WatchTracing): Tracing;
}
