import type { Contents } from "../model/trial.js";
import type { Report } from "../problems/report.js";
import { entriesOf, type Tree } from "../read/tree.js";
import { resolveDetectorValue } from "./detector.js";
import { aboveZero } from "./sign.js";
import type { TrialClock } from "./trial-clock.js";
import { unknownValue } from "./unknown.js";

/** What the vessel of a trial holds at the start. Undefined where it says nothing; what is wrong is reported and unknown. */
export function resolveContents(
  node: Tree | undefined,
  clock: TrialClock,
  anyWord: boolean,
  report: Report,
): Contents | undefined {
  if (!node) return undefined;
  const levels = entriesOf(node).map(({ key, value }) => {
    const level = resolveDetectorValue(value, anyWord, report);
    const right = level && aboveZero(`the tracer in '${key.text}'`, level, true, report);
    return { of: key.text, at: key.at, level: right ? level : unknownValue(value.at) };
  });
  return { at: node.at, begins: clock.format ? clock.first : 0, levels };
}
