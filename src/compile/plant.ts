import type { Block } from "../compartments/block.js";
import type { Network } from "../model/network.js";
import type { Part } from "./part.js";
import type { Structure } from "./structure.js";

export { Part } from "./part.js";

/**
 * A balanced, compiled network: primitive nodes and the steady flows between them, SI.
 * Kinds have been spelled out (a `repeat: 3` is three cells). Feeds and outlets are joints.
 */
export interface Plant {
  readonly network: Network;
  /** Values of all names, one slot each. */
  readonly env: Float64Array;
  /** What it was compiled with in place of the file's values. */
  readonly settings?: Settings;
  readonly nodes: readonly PlantNode[];
  /** The same as columns, by node: for plants of many cells, where `nodes` is better left unasked (it is made when asked for). */
  readonly columns: NodeColumns;
  /** Links, one per stream between primitive nodes; an exchange is two links. m3/s. */
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly flow: Float64Array;
  /** By substance that divides otherwise than the liquid, what its links carry, m3/s; see `plantFollowing`. */
  readonly carried?: ReadonlyMap<string, Float64Array>;
  /** The substance whose `carried` stands for `flow`: what links bring to a node is then no longer its inflow. */
  readonly follows?: string | undefined;
  readonly feeds: readonly { readonly name: string; readonly node: number; readonly flow: number }[];
  readonly outlets: readonly { readonly name: string; readonly node: number; readonly flow: number }[];
  /** name in the file (compartment, feed, outlet, `chain.2`) -> node whose outflow it stands for, and where it is entered. */
  readonly entry: ReadonlyMap<string, number>;
  readonly exit: ReadonlyMap<string, number>;
  /** What of it does not depend on values; shared by the plants that a `compiler` makes. */
  readonly structure: Structure;
  /** Strongly connected groups of nodes in flow order (Tarjan 1972); a group of one without a self-link is feed-forward. */
  readonly groups: readonly Int32Array[];
  /** Named streams with their flows, as the file has them: for tables and drawings. m3/s. */
  readonly streams: readonly PlantStream[];
  /** Volumes, m3. `active` leaves out what no flow reaches. */
  readonly volume: { readonly total: number; readonly active: number; readonly dead: number };
}

export interface PlantNode {
  readonly name: string;
  readonly part: (typeof Part)[keyof typeof Part];
  /** m3, a block's pockets included; 0 for a joint. */
  readonly volume: number;
  /** There where, and only where, `part` is `Block`. */
  readonly block?: Block;
  /** All that enters, exchange included, m3/s. */
  readonly inflow: number;
}

/** Nodes as columns. */
export interface NodeColumns {
  readonly size: number;
  readonly part: Uint8Array;
  /** m3 */
  readonly volume: Float64Array;
  /** m3/s */
  readonly inflow: Float64Array;
  nameOf(node: number): string;
  /** There where `part` is `Block`. */
  blockAt(node: number): Block | undefined;
}

export interface PlantStream {
  /** Names of feeds, compartments and outlets. */
  readonly from: string;
  readonly to: string;
  /** The same to the point, where a body has several ways in or out: `chain.3`, `core.overflow`. */
  readonly leaves: string;
  readonly enters: string;
  readonly flow: number;
  readonly role: "forward" | "recycle" | "exchange";
  /** As the file says it: "30 %", "rest". */
  readonly written: string;
  /** Of all that leaves there (0 to 1), where the file divides it by a share. */
  readonly share?: number;
}

/** Values to use in place of the file's, SI, by name (`bypass`, `feed.flow`). */
export type Settings = Readonly<Record<string, number>>;
