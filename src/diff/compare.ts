import { placeOf, type Span } from "../text/source.js";
import type { Difference } from "./difference.js";

/** What changed of one thing. */
export type Change = Pick<Difference, "key" | "before" | "after" | "lineBefore" | "lineAfter">;

/** A change with its two places. */
export const change = (key: string, before: string, after: string, beforeAt: Span, afterAt: Span): Change => ({
  key,
  before,
  after,
  lineBefore: lineOf(beforeAt),
  lineAfter: lineOf(afterAt),
});

/** The text of a span on one line. */
export const written = ({ source, from, to }: Span): string => source.text.slice(from, to).replace(/\s*\n\s*/g, " ");

export const lineOf = (at: Span): number => placeOf({ ...at, to: at.from }).line;

interface Item {
  readonly name: string;
  readonly at: Span;
}

/** How things of a sort are compared. */
export interface Comparison<T> {
  of(item: T): string;
  /** The thing in a few words, for what is new or gone. */
  say(item: T): string;
  changes(before: T, after: T): readonly Change[];
}

/** Things with names, paired by `pairs` (earlier name to later): the later list in its order, then what is gone. */
export function compareNamed<T extends Item>(
  before: readonly T[],
  after: readonly T[],
  pairs: ReadonlyMap<string, string>,
  { of, say, changes }: Comparison<T>,
): Difference[] {
  const earlier = new Map(before.flatMap((x) => (pairs.has(x.name) ? [[pairs.get(x.name), x] as const] : [])));
  const here = after.flatMap((y): Difference[] => {
    const x = earlier.get(y.name);
    if (!x) return [{ what: "added", of: of(y), name: y.name, after: say(y), lineAfter: lineOf(y.at) }];
    const was = x.name === y.name ? {} : { was: x.name };
    const renamed: Difference[] =
      x.name === y.name
        ? []
        : [{ what: "renamed", of: of(y), name: y.name, ...was, lineBefore: lineOf(x.at), lineAfter: lineOf(y.at) }];
    return [
      ...renamed,
      ...changes(x, y).map((c): Difference => ({ what: "changed", of: of(y), name: y.name, ...was, ...c })),
    ];
  });
  return [...here, ...before.filter((x) => !pairs.has(x.name)).map((x) => removed(of(x), x.name, say(x), x.at))];
}

export const removed = (of: string, name: string, before: string, at: Span): Difference => ({
  what: "removed",
  of,
  name,
  before,
  lineBefore: lineOf(at),
});

/** A statement without a name, told by what it means. */
export interface Statement {
  readonly key: string;
  readonly text: string;
  readonly at: Span;
}

/** Statements that stand in one list only. */
export function compareStatements(of: string, before: readonly Statement[], after: readonly Statement[]): Difference[] {
  const missing = (from: readonly Statement[], list: readonly Statement[]): Statement[] => {
    const keys = new Set(from.map((s) => s.key));
    return list.filter((s) => !keys.has(s.key));
  };
  return [
    ...missing(before, after).map(
      (s): Difference => ({ what: "added", of, name: "", after: s.text, lineAfter: lineOf(s.at) }),
    ),
    ...missing(after, before).map((s) => removed(of, "", s.text, s.at)),
  ];
}
