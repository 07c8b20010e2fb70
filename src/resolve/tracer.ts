import type { Retained, Tracer } from "../model/trial.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, type Tree } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { certain } from "./certain.js";
import { aboveZero } from "./sign.js";
import { emptyScope, resolveValue } from "./value.js";

/** `tracer:`; undefined where there is none. What is wrong in it is reported and left out; places and names stay. */
export function resolveTracer(node: Tree | undefined, report: Report): Tracer | undefined {
  if (!node) return undefined;
  const halfLife = resolveValue(child(node, "half-life"), dimensions.time, emptyScope, report);
  const loss = resolveValue(child(node, "loss"), dimensions.frequency, emptyScope, report);
  aboveZero("the half-life of a tracer", halfLife, false, report);
  aboveZero("the loss of a tracer", loss, true, report);
  certain("the half-life of a tracer", halfLife, report);
  certain("the loss of a tracer", loss, report);
  const retained = entriesOf(child(node, "retained")).map(({ key, value }) => resolveRetained(key, value, report));
  const follows = child(node, "follows");
  return {
    ...(follows?.type === "scalar" ? { follows: { of: follows.text, at: follows.at } } : {}),
    ...(halfLife ? { decay: Math.LN2 / halfLife.of([]) } : {}),
    ...(loss && loss.of([]) > 0 ? { loss: loss.of([]) } : {}),
    ...(retained.length > 0 ? { retained } : {}),
  };
}

/** A number above 0, or a lone name: which one it is the network knows. */
function resolveRetained(
  key: { readonly text: string; readonly at: Retained["at"] },
  value: Tree,
  report: Report,
): Retained {
  const body = { body: key.text, at: key.at };
  if (value.type === "scalar" && /^[A-Za-z][\w.-]*$/.test(value.text.trim()))
    return { ...body, factor: { name: value.text.trim(), at: value.at } };
  const factor = resolveValue(value, dimensions.ratio, emptyScope, report);
  aboveZero("a retention", factor, false, report);
  certain(`the retention in '${key.text}'`, factor, report, true);
  return { ...body, factor: factor?.of([]) ?? Number.NaN };
}
