import type { Span } from "../text/source.js";
import { catalogue } from "./catalogue.js";
import type { CatalogueEntry, Problem } from "./problem.js";

export type Catalogue = typeof catalogue;
export type Code = keyof Catalogue;
export type DataOf<C extends Code> = Catalogue[C] extends CatalogueEntry<infer D> ? D : never;

/** Hands a problem to whoever collects them. The catalogue words it; the caller gives code, place and data. */
export type Report = <C extends Code>(code: C, at: Span, data: DataOf<C>, also?: { at: Span; says: string }) => void;

/** A collector: `report` adds, `problems` holds them in the order reported. */
export function collector(): { report: Report; problems: Problem[] } {
  const problems: Problem[] = [];
  return { problems, report: (code, at, data, also) => problems.push(problem(code, at, data, also)) };
}

/** One worded problem. */
export function problem<C extends Code>(
  code: C,
  at: Span,
  data: DataOf<C>,
  also?: { at: Span; says: string },
): Problem {
  const e = catalogue[code] as unknown as CatalogueEntry<DataOf<C>>;
  const fix = typeof e.fix === "string" ? e.fix : e.fix(data);
  return { code, severity: e.severity, message: e.says(data), fix, at, ...(also ? { also } : {}) };
}

/** True where something is wrong, not only odd. */
export const hasErrors = (problems: readonly Problem[]): boolean => problems.some((p) => p.severity === "error");
