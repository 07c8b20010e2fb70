import type { Injection } from "../model/trial.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type MapNode, type Tree } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { certain } from "./certain.js";
import { resolveDetectorValue } from "./detector.js";
import { resolveInlet } from "./inlet.js";
import { aboveZero } from "./sign.js";
import type { TrialClock } from "./trial-clock.js";
import type { ResolvedTable } from "./trial-table.js";
import { unknownValue } from "./unknown.js";
import { emptyScope, resolveValue } from "./value.js";

/** One injection of a trial, on the trial's clock. What is wrong is reported and unknown; undefined where it has no place. */
export function resolveInjection(
  node: MapNode,
  table: ResolvedTable | undefined,
  clock: TrialClock,
  anyWord: boolean,
  files: Files,
  report: Report,
): Injection | undefined {
  const at = child(node, "at");
  const written = child(node, "start");
  const given = written && startOf(written, clock, report);
  const form = resolveForm(node, table, given, clock, anyWord, files, report);
  const lasting = resolveValue(child(node, "lasting"), dimensions.time, emptyScope, report);
  aboveZero("the time that an injection takes", lasting, true, report);
  certain("the time that an injection takes", lasting, report);
  const first = form?.is === "signal" ? form.table.time[0] : clock.format ? clock.first : 0;
  const start = written ? given : first;
  if (at?.type !== "scalar") return undefined;
  const put = form ?? { is: "pulse", amount: unknownValue(node.at) };
  return { at: at.text, where: at.at, start: start ?? clock.first, lasting: lasting?.of([]) ?? 0, form: put };
}

/**
 * A start on the trial's clock. On a clock without dates, more than half a day after the last reading is the day before; so is what
 * would be late in a log that begins within two hours after that.
 */
function startOf(node: Tree, clock: TrialClock, report: Report): number | undefined {
  const start = clock.time(node, report);
  if (start === undefined || clock.last === clock.first) return start;
  const wraps = clock.format !== undefined && !clock.format.dated;
  const before = start - 86_400;
  const late = start > (clock.first + clock.last) / 2;
  if (wraps && late && before >= 0 && before < clock.first && clock.first - before < 7200) return before;
  if (start <= clock.last) return start;
  if (wraps && start > clock.last + 43_200) return before;
  report("start-late", node.at, { start: clock.show(start), last: clock.show(clock.last) });
  return undefined;
}

function resolveForm(
  node: MapNode,
  table: ResolvedTable | undefined,
  start: number | undefined,
  clock: TrialClock,
  anyWord: boolean,
  files: Files,
  report: Report,
): Injection["form"] | undefined {
  // Exactly one is there: the shape check has seen to it.
  const is = (["pulse", "step", "signal"] as const).find((key) => child(node, key));
  if (!is) return undefined;
  const written = child(node, is);
  if (is === "pulse") {
    const amount = resolveDetectorValue(written, anyWord, report);
    return amount && aboveZero("the amount of tracer", amount, false, report) ? { is: "pulse", amount } : undefined;
  }
  if (is === "signal") {
    return table && written?.type === "map" ? resolveInlet(written, table, start, clock, files, report) : undefined;
  }
  const level = resolveDetectorValue(written?.type === "map" ? child(written, "to") : written, anyWord, report);
  const fromNode = child(written, "from");
  const from = resolveDetectorValue(fromNode, anyWord, report);
  if (!level || (fromNode && !from)) return undefined;
  certain("the level before a step", from, report);
  const levels: readonly [string, Value | undefined][] = [
    ["the level of a step", level],
    ["the level before a step", from],
  ];
  return levels.every(([what, value]) => aboveZero(what, value, true, report))
    ? { is: "step", level, from }
    : undefined;
}

/** Keys under which an injection or a reading holds a table. */
export const signalNode = (node: Tree): MapNode | undefined => {
  const signal = child(node, "signal");
  return signal?.type === "map" ? signal : undefined;
};
