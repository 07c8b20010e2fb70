/** One thing that is not the same in two documents. Texts are as written, in the files' own units; lines from 1. */
export interface Difference {
  readonly what: "added" | "removed" | "renamed" | "changed";
  /** "compartment", "feed", "parameter"; "" for a key of a document that is no network. */
  readonly of: string;
  /** As the later document calls it; as the earlier one did, where it is removed. */
  readonly name: string;
  /** The earlier name, where that differs. */
  readonly was?: string;
  /** What of it changed: `volume`, `to`, `between`. */
  readonly key?: string;
  readonly before?: string;
  readonly after?: string;
  readonly lineBefore?: number;
  readonly lineAfter?: number;
}
