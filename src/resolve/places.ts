import type { Place } from "../model/trial.js";
import type { Report } from "../problems/report.js";
import { entriesOf, type Tree } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { formatNumber } from "../units/format.js";
import { emptyScope, resolveValue } from "./value.js";

/** Where a reading draws from: one place, or several with shares that add to 1. Shares that are wrong are reported and unknown. */
export function resolvePlaces(node: Tree | undefined, report: Report): { at: string; places: Place[] } | undefined {
  if (node?.type === "scalar") return { at: node.text, places: [{ name: node.text, where: node.at, share: 1 }] };
  if (node?.type !== "map") return undefined;
  const written = entriesOf(node).map(({ key, value }) => {
    const isRest = value.type === "scalar" && value.text.trim() === "rest";
    const share = isRest ? undefined : resolveValue(value, dimensions.ratio, emptyScope, report);
    return { name: key.text, where: key.at, isRest, share: share?.of([]) };
  });
  const known = written.every((w) => w.isRest || w.share !== undefined);
  const sum = written.reduce((total, w) => total + (w.share ?? 0), 0);
  const rests = written.filter((w) => w.isRest).length;
  const negative = written.some((w) => (w.share ?? 0) < 0);
  const whole = rests === 1 ? sum <= 1 + 1e-9 : rests === 0 && Math.abs(sum - 1) <= 1e-9;
  if (known && (!whole || negative || written.length === 0))
    report("mix-sum", node.at, { total: formatNumber(100 * sum, 6), rests });
  const places = written.map(({ name, where, share }) => ({ name, where, share: share ?? Math.max(0, 1 - sum) }));
  const at = places.map(({ name, share }) => `${formatNumber(100 * share, 4)} % ${name}`).join(" + ");
  return { at, places };
}
