import type { Files } from "../read/files.js";
import type { MapNode } from "../read/tree.js";
import type { Span } from "../text/source.js";
import type { Aim } from "./aim.js";
import type { Duty } from "./duty.js";
import type { Network } from "./network.js";
import type { Trial } from "./trial.js";
import type { Value } from "./value.js";

/** The whole job, with every file that it names already read and resolved. */
export interface Study {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  readonly notes: string | undefined;
  readonly rivals: readonly Rival[];
  readonly trials: readonly Trial[];
  readonly duties: readonly Duty[];
  readonly changes: readonly ChangeDocument[];
  readonly sweeps: readonly SweepAsked[];
  readonly aims: readonly AimAsked[];
  readonly out: string | undefined;
  readonly seed: number;
}

/** A network that competes to explain the trials, with the tree that changes are merged into. */
export interface Rival {
  readonly network: Network;
  readonly tree: MapNode;
  readonly path: string;
  /** How the network reached the files that it names. */
  readonly files: Files;
}

/** A change to compare: `change:` of a network document without a vessel of its own. */
export interface ChangeDocument {
  readonly title: string;
  readonly path: string;
  readonly notes: string | undefined;
  readonly at: Span;
  /** What to merge into a rival. */
  readonly change: MapNode;
}

/** A duty of the study, in the vessel as it is or with one of the changes. */
export interface Asked {
  readonly at: Span;
  readonly duty: Duty;
  readonly change: ChangeDocument | undefined;
}

/** Figures of a duty over one or two inputs. */
export interface SweepAsked extends Asked {
  readonly over: readonly InputRange[];
}

/** The value of an input at which a figure is what it shall be. */
export interface AimAsked extends Asked {
  readonly aim: Aim;
  readonly by: InputRange;
  /** Share of the draws that shall meet it; undefined: at the fitted values. */
  readonly confidence: number | undefined;
}

/** An input by name, and between what. */
export interface InputRange {
  readonly name: string;
  readonly at: Span;
  /** Undefined: the input's own. */
  readonly between: readonly [Value, Value] | undefined;
  readonly points: number;
  /** Undefined: as the input is spaced itself. */
  readonly log: boolean | undefined;
}
