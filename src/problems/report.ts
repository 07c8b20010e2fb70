import type { Span } from "../text/source.js";
import { catalogue } from "./catalogue.js";
import type { CatalogueEntry, Problem } from "./problem.js";

export type Catalogue = typeof catalogue;
export type Code = keyof Catalogue;
export type DataOf<C extends Code> = Catalogue[C] extends CatalogueEntry<infer D> ? D : never;

/** Hands a problem to whoever collects them. The catalogue words it; the caller gives code, place and data. */
export type Report = <C extends Code>(code: C, at: Span, data: DataOf<C>, also?: { at: Span; says: string }) => void;

/** So many problems of one code are told; who has more has one cause, or a file that is none. */
const most = 100;

/**
 * A collector: `report` adds, `problems` holds them in the order reported. Of each code it keeps the first hundred, then one that says
 * that there are more.
 */
export function collector(): { report: Report; problems: Problem[] } {
  const problems: Problem[] = [];
  const counts = new Map<Code, number>();
  const report: Report = (code, at, data, also) => {
    const count = (counts.get(code) ?? 0) + 1;
    counts.set(code, count);
    if (count <= most) problems.push(problem(code, at, data, also));
    else if (count === most + 1) problems.push(problem("and-more", at, { code, told: most }));
  };
  return { problems, report };
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
  return { code, severity: e.severity, message: short(e.says(data)), fix: short(fix), at, ...(also ? { also } : {}) };
}

/** A message of a few lines, whatever was quoted in it. */
const short = (text: string): string => (text.length <= 1000 ? text : `${text.slice(0, 600)} … ${text.slice(-200)}`);

/** True where something is wrong, not only odd. */
export const hasErrors = (problems: readonly Problem[]): boolean => problems.some((p) => p.severity === "error");
