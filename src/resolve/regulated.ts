import type { Regulated } from "../model/duty.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, type Tree } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { aboveZero } from "./sign.js";
import { emptyScope, resolveValue, type Wanted } from "./value.js";

/** `regulated:` of a duty. Undefined where there is none, or once an error is reported. */
export function resolveRegulated(node: Tree | undefined, report: Report): Regulated | undefined {
  const outlet = child(node, "at");
  if (!node || outlet?.type !== "scalar") return undefined;
  let good = true;
  const value = (from: Tree | undefined, wanted: Wanted, what: string): Value | undefined => {
    if (!from) return undefined;
    const found = resolveValue(from, wanted, emptyScope, report);
    if (!found || !aboveZero(what, found, false, report)) good = false;
    return found;
  };
  const residual = value(child(node, "residual"), dimensions["mass concentration"], "the residual");
  const bafflingFactor = value(child(node, "baffling-factor"), dimensions.ratio, "the baffling factor");
  if (bafflingFactor && bafflingFactor.of([]) > 1) {
    report("baffling-factor", bafflingFactor.at, {});
    good = false;
  }
  const inactivation = entriesOf(child(node, "inactivation")).flatMap(({ key, value: entry }) => {
    const log = value(child(entry, "log"), dimensions.ratio, `the decades of '${key.text}'`);
    const ct = value(child(entry, "ct"), dimensions["contact time"], `the contact time of '${key.text}'`);
    return log && ct ? [{ name: key.text, at: key.at, log, ct }] : [];
  });
  if (!good) return undefined;
  return { at: node.at, outlet: outlet.text, outletAt: outlet.at, residual, bafflingFactor, inactivation };
}
