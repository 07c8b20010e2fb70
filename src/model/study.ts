import type { Tree } from "../read/tree.js";
import type { Span } from "../text/source.js";
import type { Duty } from "./duty.js";
import type { Network } from "./network.js";
import type { Trial } from "./trial.js";

/** The whole job, with every file that it names already read and resolved. */
export interface Study {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  readonly rivals: readonly { readonly network: Network; readonly tree: Tree; readonly path: string }[];
  readonly trials: readonly Trial[];
  readonly duties: readonly Duty[];
  readonly changes: readonly {
    readonly title: string;
    readonly path: string;
    readonly tree: Tree;
    readonly at: Span;
  }[];
  readonly out: string | undefined;
  readonly seed: number;
}
