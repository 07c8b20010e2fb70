import type { KeyShape } from "../schema/shape.js";
import type { Box, Svg } from "../svg/svg.js";
import type { Block } from "./block.js";
import type { ZoneNames, ZoneTable } from "./zone-table.js";

/** What a compartment's keys say, evaluated. A key inside a key has both names: `stagnant.volume`. */
export interface KindValues {
  /** Quantities, SI. */
  readonly values: Readonly<Record<string, number>>;
  /** Whole numbers. */
  readonly counts: Readonly<Record<string, number>>;
  /** Choices. */
  readonly words: Readonly<Record<string, string>>;
  /** Keys of `values` that are plain numbers: shares, where a flow might stand too. */
  readonly shares: ReadonlySet<string>;
  /** Cells and flows of a kind that reads them from tables. */
  readonly zones?: ZoneTable | undefined;
}

/** Everything that one kind of compartment is. One kind, one file, one line in `kinds`. */
export interface CompartmentKind {
  readonly name: string;
  /** A sentence or two for schema, hover and manual. */
  readonly says: string;
  /** Keys besides `kind`, `to`, `exchange`: quantities, whole numbers, choices, and records of quantities. */
  readonly keys: Readonly<Record<string, KeyShape>>;
  /** May streams pass through it? `dead` says no. */
  readonly flows: boolean;
  /** May any of this kind have `exchange:`, and may this very one? */
  readonly exchanges: boolean;
  readonly mayExchange: (counts: Readonly<Record<string, number>>) => boolean;
  /** May a species divide otherwise than the liquid where its outflow splits? */
  readonly sends?: true;
  /** Are its cells and flows read from tables? */
  readonly zoned?: true;
  /** Is it a document of its own, placed here? It is resolved into the bodies that it has, so that no engine meets it. */
  readonly placed?: true;
  /** Liquid held, pockets included, m3. */
  readonly volume: (of: Pick<KindValues, "values" | "counts" | "zones">) => number;
  /** Spells the compartment out in primitive nodes; returns where streams enter and leave (undefined: not in the balance). */
  spell(maker: NodeMaker, of: KindValues): Ports | undefined;
  /** Its picture inside a box whose area stands for the volume. */
  picture(box: Box, of: KindValues): Svg;
  /** Proportion width / height of that box. */
  readonly aspect: (of: KindValues) => number;
}

/** Where streams enter and leave a spelled-out compartment, and its members by their suffix ("1", "2"; none for one). */
export interface Ports {
  /** Undefined where streams have several ways in, or out: then they go by `inlets`, or `outlets`. */
  readonly entry: number | undefined;
  readonly exit: number | undefined;
  readonly members: readonly Member[];
  readonly inlets?: readonly Member[];
  readonly outlets?: readonly Member[];
}

/** A node known by the compartment's name, a dot and a suffix. */
export interface Member {
  readonly suffix: string;
  readonly node: number;
}

/** Makes primitive nodes and links between them. */
export interface NodeMaker {
  /** What streams bring and take, m3/s. */
  readonly through: number;
  /**
   * What streams bring to each of its members, m3/s, by suffix; those to the body itself under "". Undefined where no
   * stream enters past the first.
   */
  readonly brought: ReadonlyMap<string, number> | undefined;
  cell(volume: number, suffix?: string): number;
  delay(volume: number): number;
  joint(suffix?: string): number;
  block(block: Block): number;
  /** A flow from the first to the second, m3/s: all of the through-flow, where none is given. */
  chain(from: number, to: number, flow?: number): void;
  /** A flow both ways between two nodes, m3/s, on top of the through-flow. */
  exchange(a: number, b: number, flow: number): void;
  /** Many cells at once, known by the names of a table; returns the first. Those without volume are joints. */
  cells(volume: Float64Array, names: ZoneNames): number;
  /** Many flows at once, m3/s. */
  links(from: Int32Array, to: Int32Array, flow: Float64Array): void;
}
