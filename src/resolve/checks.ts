import type { Check } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { child, itemsOf, type Tree, textOf } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { resolveValue, type Scope } from "./value.js";

const subjects = { "mean-time": dimensions.time, volume: dimensions.volume, flow: dimensions.flow } as const;

/** `checks:` lines: what must hold at the start values. `within` is relative and 0.1 % where none is given. */
export function resolveChecks(node: Tree | undefined, scope: Scope, report: Report): Check[] {
  return itemsOf(node).flatMap((item) => {
    for (const what of Object.keys(subjects) as (keyof typeof subjects)[]) {
      const of = textOf(item, what);
      if (of === undefined) continue;
      const equals = resolveValue(child(item, "equals"), subjects[what], scope, report);
      const within = child(item, "within")
        ? resolveValue(child(item, "within"), dimensions.ratio, scope, report)?.of([])
        : 0.001;
      return equals && within !== undefined
        ? [{ at: item.at, what, of, ofAt: child(item, what)?.at ?? item.at, equals, within }]
        : [];
    }
    return [];
  });
}
