import type { Injection, Series } from "../model/trial.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, type MapNode, type Tree, textOf } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { resolveDetectorValue } from "./detector.js";
import { resolveCalibration, resolveLeaveOut } from "./reading.js";
import { aboveZero } from "./sign.js";
import type { TrialClock } from "./trial-clock.js";
import type { ResolvedTable } from "./trial-table.js";
import { emptyScope, resolveValue } from "./value.js";

/** One injection of a trial, on the trial's clock. Undefined where something is wrong; reported. */
export function resolveInjection(
  node: MapNode,
  table: ResolvedTable | undefined,
  clock: TrialClock,
  anyWord: boolean,
  report: Report,
): Injection | undefined {
  const at = child(node, "at");
  const form = resolveForm(node, table, clock, anyWord, report);
  const lasting = resolveValue(child(node, "lasting"), dimensions.time, emptyScope, report);
  if (!aboveZero("the time that an injection takes", lasting, true, report)) return undefined;
  const first = form?.is === "signal" ? form.table.time[0] : clock.format ? clock.first : 0;
  const startNode = child(node, "start");
  const start = startNode ? startOf(startNode, clock, report) : first;
  if (!form || start === undefined || at?.type !== "scalar") return undefined;
  return { at: at.text, where: at.at, start, lasting: lasting?.of([]) ?? 0, form };
}

/** A start on the trial's clock. On a clock without dates, more than half a day after the last reading is the day before. */
function startOf(node: Tree, clock: TrialClock, report: Report): number | undefined {
  const start = clock.time(node, report);
  if (start === undefined || clock.last === clock.first || start <= clock.last) return start;
  if (clock.format && !clock.format.dated && start > clock.last + 43_200) return start - 86_400;
  report("start-late", node.at, { start: clock.show(start), last: clock.show(clock.last) });
  return undefined;
}

function resolveForm(
  node: MapNode,
  table: ResolvedTable | undefined,
  clock: TrialClock,
  anyWord: boolean,
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
    const inlet = table && written?.type === "map" ? inletSeries(written, table, clock, report) : undefined;
    return inlet && { is: "signal", table: inlet };
  }
  const level = resolveDetectorValue(written?.type === "map" ? child(written, "to") : written, anyWord, report);
  const fromNode = child(written, "from");
  const from = resolveDetectorValue(fromNode, anyWord, report);
  if (!level || (fromNode && !from)) return undefined;
  const levels: readonly [string, Value | undefined][] = [
    ["the level of a step", level],
    ["the level before a step", from],
  ];
  return levels.every(([what, value]) => aboveZero(what, value, true, report))
    ? { is: "step", level, from }
    : undefined;
}

/** A measured inlet, cleaned as declared: calibrated, stretches left out, the sample line's delay taken off. */
function inletSeries(node: MapNode, table: ResolvedTable, clock: TrialClock, report: Report): Series | undefined {
  const baseline = child(node, "baseline");
  if (baseline && textOf(node, "baseline") !== "none") report("signal-key", baseline.at, { key: "baseline" });
  const lag = child(child(node, "line"), "lag");
  if (lag) report("signal-key", lag.at, { key: "lag" });
  const delay = resolveValue(child(child(node, "line"), "delay"), dimensions.time, emptyScope, report);
  const calibration = resolveCalibration(child(node, "calibration"), table.valueUnit, report);
  const leaveOut = resolveLeaveOut(child(node, "leave-out"), table.series, clock, report);
  if (calibration === "faulty" || !aboveZero("the delay of a sample line", delay, true, report)) return undefined;
  const { time, value, row } = table.series;
  const kept = Array.from(time.keys()).filter(
    (i) => !leaveOut.some(({ from, to }) => time[i] >= from && time[i] <= to),
  );
  const late = delay?.of([]) ?? 0;
  const { blank, rise, per } = calibration ?? { blank: 0, rise: 1, per: 1 };
  return {
    ...table.series,
    time: Float64Array.from(kept, (i) => time[i] - late),
    value: Float64Array.from(kept, (i) => ((value[i] - blank) / rise) * per),
    row: Int32Array.from(kept, (i) => row[i]),
    valueUnit: calibration?.perUnit ?? table.valueUnit,
  };
}

/** Keys under which an injection or a reading holds a table. */
export const signalNode = (node: Tree): MapNode | undefined => {
  const signal = child(node, "signal");
  return signal?.type === "map" ? signal : undefined;
};
