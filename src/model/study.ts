import type { Files } from "../read/files.js";
import type { MapNode } from "../read/tree.js";
import type { Span } from "../text/source.js";
import type { Duty } from "./duty.js";
import type { Network } from "./network.js";
import type { Trial } from "./trial.js";

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
