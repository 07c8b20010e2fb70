import type { Span } from "../text/source.js";

export type Severity = "error" | "warning";

/** What one entry of the catalogue says. `D` is the data that the wording needs. */
export interface CatalogueEntry<D> {
  readonly severity: Severity;
  readonly says: (data: D) => string;
  readonly fix: string | ((data: D) => string);
  /** What the manual shows, for a problem that no file can show by itself (`test/broken/` has the others). */
  readonly example?: D;
}

/** Builds an entry; the wording gives the data its type, the example only follows it. */
export const entry = <D>(
  e: Omit<CatalogueEntry<D>, "example"> & { readonly example?: NoInfer<D> },
): CatalogueEntry<D> => e;

/** A finding about an input: an error value, never thrown. */
export interface Problem {
  readonly code: string;
  readonly severity: Severity;
  readonly message: string;
  readonly fix: string;
  readonly at: Span;
  /** The earlier place, where two places disagree. */
  readonly also?: { readonly at: Span; readonly says: string };
}
