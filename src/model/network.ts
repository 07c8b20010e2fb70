import type { CompartmentKind } from "../compartments/kind.js";
import type { ZoneTable } from "../compartments/zone-table.js";
import type { Span } from "../text/source.js";
import type { Basis } from "../units/basis.js";
import type { Unit } from "../units/unit.js";
import type { Value } from "./value.js";

/** A network with every name found and every value bound: what the engineer means, not yet balanced. */
export interface Network {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  readonly notes: string | undefined;
  /** What volumes and flows count: with `mass` all m3 are kg. */
  readonly basis: Basis;
  /** Constants, parameters and `feed.flow`s: the names that values may use. One slot each in an Env. */
  readonly names: readonly Named[];
  /** Slots in an order in which each depends on earlier ones only. */
  readonly order: readonly number[];
  readonly feeds: readonly Feed[];
  readonly compartments: readonly Compartment[];
  readonly outlets: readonly Outlet[];
  /** Parts, whose bodies stand among the compartments; outer ones first. */
  readonly groups: readonly Group[];
  readonly requires: readonly Requirement[];
  readonly checks: readonly Check[];
  /** Every name that some value, bound or requirement uses. */
  readonly used: ReadonlySet<string>;
  /** Units that the file uses, per dimension key: results are printed in them. */
  readonly units: UnitBook;
}

/** A vessel that nothing enters and nothing leaves: a flask, a loop on total return. */
export const isClosed = ({ feeds, outlets }: { feeds: readonly unknown[]; outlets: readonly unknown[] }): boolean =>
  feeds.length === 0 && outlets.length === 0;

/** Substances that divide somewhere otherwise than the liquid, in file order. */
export const followedIn = ({ compartments }: Pick<Network, "compartments">): string[] => [
  ...new Set(compartments.flatMap((c) => (c.sends ?? []).map((s) => s.of))),
];

/** A name that has a value. `slot` is its index in `Network.names` and in an Env. */
export interface Named {
  readonly name: string;
  readonly slot: number;
  /** `inflow`: what streams bring to a feed of a part, which nobody sets. */
  readonly role: "constant" | "parameter" | "feed-flow" | "inflow";
  readonly at: Span;
  readonly value: Value;
  readonly between: readonly [Value, Value] | undefined;
  readonly spacing: "linear" | "log";
  /** A parameter that has a value of its own in each trial. */
  readonly perTrial?: boolean;
  readonly about: string | undefined;
  /** Of a parameter that a chemistry brings into a fit: its file, and its name there. */
  readonly chemistry?: { readonly path: string; readonly name: string };
}

export interface Feed {
  readonly name: string;
  readonly at: Span;
  readonly flow: Value;
  readonly flowSlot: number;
  readonly streams: readonly Stream[];
  readonly toAt: Span;
}

export interface Compartment {
  readonly name: string;
  readonly at: Span;
  readonly kind: CompartmentKind;
  /** By key of the kind: bound values. A key inside a key has both names: `stagnant.volume`. */
  readonly values: Readonly<Record<string, Value>>;
  /** Whole numbers of the kind (`repeat`). */
  readonly counts: Readonly<Record<string, number>>;
  /** Choices of the kind (`ends`). */
  readonly words: Readonly<Record<string, string>>;
  /** Cells and flows of a kind that reads them from tables. */
  readonly zones?: ZoneTable | undefined;
  readonly streams: readonly Stream[];
  readonly exchanges: readonly Exchange[];
  readonly toAt: Span;
  /** Substances that divide otherwise than the liquid where its streams part: named, and where; unknown where a share could not be read. */
  readonly sends?: readonly { readonly of: string; readonly at: Span; readonly unknown: boolean }[];
}

export interface Outlet {
  readonly name: string;
  readonly at: Span;
}

/** A part, or one of its repeats (`core.2`): bodies that were described together in a file of their own. */
export interface Group {
  /** Where one inlet or outlet is, the name alone stands for it. */
  readonly name: string;
  readonly at: Span;
  readonly title: string;
  readonly path: string;
  /** Names of its compartments, those of parts inside it too. */
  readonly members: readonly string[];
  /** Its ports are junctions among its members. */
  readonly inlets: readonly string[];
  readonly outlets: readonly string[];
}

/** One branch of a `to:`. Exactly one of the three ways to say how much. */
export interface Stream {
  readonly to: string;
  readonly at: Span;
  readonly split: { readonly is: "share" | "flow"; readonly value: Value } | { readonly is: "rest" | "all" };
  /** Of substances that divide otherwise than the liquid where this stream leaves, the share that it takes; none given is none. */
  readonly carries?: ReadonlyMap<string, Value | "rest">;
  /** The inlet, or the member of a repeat, by which it enters a body that has several, and the outlet by which it leaves one. */
  readonly enters?: string | undefined;
  readonly leaves?: string | undefined;
  /** Is it reported that `to` is no place? Then it may be meant to go anywhere. */
  readonly unknown?: true;
}

/** Equal flow both ways between a compartment and a partner. */
export interface Exchange {
  /** A compartment, or a member of a repeat: `chain.2`. */
  readonly partner: string;
  readonly at: Span;
  readonly flow: Value;
}

/** `left < right` (or <=, >, >=): what physics forbids a fit to try. `of` gives the slack, positive where it holds. */
export interface Requirement {
  readonly text: string;
  readonly at: Span;
  readonly left: Value;
  readonly right: Value;
  slack(env: ArrayLike<number>): number;
}

/** A statement that `verify` tests. */
export interface Check {
  readonly at: Span;
  readonly what: "mean-time" | "volume" | "flow";
  readonly of: string;
  readonly ofAt: Span;
  /** The substance whose mean time is meant; undefined: the liquid. */
  readonly follows?: { readonly of: string; readonly at: Span } | undefined;
  readonly equals: Value;
  /** Relative to `equals`. */
  readonly within: number;
}

/** The unit to print a dimension in: the one that the file uses first, else the usual one. */
export interface UnitBook {
  unitFor(dimension: readonly number[]): Unit;
  /** Unit of time: that of the first feed's flow. */
  readonly time: Unit;
}
