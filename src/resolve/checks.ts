import type { Check } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { child, itemsOf, type Tree } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { unknownValue } from "./unknown.js";
import { emptyScope, resolveValue, type Scope } from "./value.js";

const subjects = { "mean-time": dimensions.time, volume: dimensions.volume, flow: dimensions.flow } as const;

/** How far a figure may be off where the file does not say, relative. */
const usualWithin = 0.001;

/** `checks:` lines: what must hold at the start values. `checkNames` are the names that they use. */
export function resolveChecks(
  node: Tree | undefined,
  scope: Scope,
  report: Report,
): { checks: Check[]; checkNames: string[] } {
  const checks = itemsOf(node).flatMap((item): Check[] => {
    const what = (Object.keys(subjects) as (keyof typeof subjects)[]).find((key) => child(item, key));
    const of = what && child(item, what);
    if (of?.type !== "scalar") return [];
    const equals = resolveValue(child(item, "equals"), subjects[what as keyof typeof subjects], scope, report);
    const written = child(item, "within");
    const within = written ? resolveValue(written, dimensions.ratio, emptyScope, report)?.of([]) : usualWithin;
    const substance = child(item, "follows");
    const follows = substance?.type === "scalar" ? { of: substance.text, at: substance.at } : undefined;
    const sound = { equals: equals ?? unknownValue(item.at), within: within ?? usualWithin };
    return [{ at: item.at, what: what as keyof typeof subjects, of: of.text, ofAt: of.at, follows, ...sound }];
  });
  return { checks, checkNames: checks.flatMap((c) => c.equals.uses) };
}
