import type { Span } from "../text/source.js";
import type { Chemistry } from "./chemistry.js";
import type { Value } from "./value.js";

/** One operating point: what is fed, and what counts. */
export interface Duty {
  readonly title: string;
  readonly at: Span;
  readonly path: string;
  readonly chemistry: Chemistry | undefined;
  /** Flows of this duty by feed name. */
  readonly flows: ReadonlyMap<string, Value>;
  /** Constants of the chemistry or network set otherwise here. */
  readonly with: ReadonlyMap<string, Value>;
  /** Feed concentrations: feed name -> species -> value. */
  readonly feeds: ReadonlyMap<string, ReadonlyMap<string, Value>>;
  readonly report: readonly Reported[];
}

/** A figure that a duty asks for. `at` undefined: over all outlets together. */
export interface Reported {
  readonly text: string;
  readonly place: Span;
  readonly what: "conversion" | "yield" | "selectivity" | "log-removal" | "concentration" | "tracer-time";
  readonly of: string;
  /** `yield of P from A`, `selectivity of P over S`: the second species. tracer-time: 10, 50, 90. */
  readonly versus: string | undefined;
  readonly percent: number | undefined;
  readonly at: string | undefined;
}
