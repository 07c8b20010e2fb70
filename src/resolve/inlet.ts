import type { Injection } from "../model/trial.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type MapNode, textOf } from "../read/tree.js";
import { dimensions } from "../units/dimension.js";
import { resolveCalibration } from "./calibration.js";
import { resolveLeaveOut } from "./reading.js";
import { aboveZero } from "./sign.js";
import { correct } from "./stages.js";
import type { TrialClock } from "./trial-clock.js";
import type { ResolvedTable } from "./trial-table.js";
import { emptyScope, resolveValue } from "./value.js";

/**
 * A measured inlet, cleaned as declared: corrected, stretches left out, the sample line's delay and the baseline taken off.
 * @param start when the injection began; a baseline is taken from what lies before
 */
export function resolveInlet(
  node: MapNode,
  table: ResolvedTable,
  start: number | undefined,
  clock: TrialClock,
  files: Files,
  report: Report,
): Injection["form"] | undefined {
  const line = child(node, "line");
  const delay = resolveValue(child(line, "delay"), dimensions.time, emptyScope, report);
  const lag = resolveValue(child(line, "lag"), dimensions.time, emptyScope, report);
  const calibration = resolveCalibration(child(node, "calibration"), table.valueUnit, files, report);
  const leaveOut = resolveLeaveOut(child(node, "leave-out"), table.series, clock, report);
  const right =
    aboveZero("the delay of a sample line", delay, true, report) &&
    aboveZero("the lag of a detector", lag, true, report);
  if (calibration === "faulty" || !right) return undefined;
  const staged = correct(table.series, node, calibration, undefined, report);
  if (!staged) return undefined;
  const value = staged.stages[staged.stages.length - 1]?.value ?? table.series.value;
  const { row } = table.series;
  const late = delay?.of([]) ?? 0;
  const kept = Array.from(row.keys()).filter(
    (i) => !leaveOut.some(({ from, to }) => table.series.time[i] >= from && table.series.time[i] <= to),
  );
  const time = Float64Array.from(kept, (i) => table.series.time[i] - late);
  const clean = Float64Array.from(kept, (i) => value[i]);
  const baseline = textOf(node, "baseline");
  if (baseline === "constant" || baseline === "drift") {
    const before = start === undefined ? 0 : time.filter((t) => t < start).length;
    if (before < 3) {
      report("inlet-baseline", child(node, "baseline")?.at ?? node.at, { before });
      return undefined;
    }
    takeOff(time, clean, before, baseline === "drift");
  }
  return {
    is: "signal",
    table: {
      ...table.series,
      time,
      value: clean,
      row: Int32Array.from(kept, (i) => row[i]),
      valueUnit: calibration?.perUnit ?? table.valueUnit,
    },
    ...(lag && lag.of([]) > 0 ? { lag: lag.of([]) } : {}),
  };
}

/** A constant through the points before, or a line through their middle and that of the last twentieth. In place. */
function takeOff(time: Float64Array, value: Float64Array, before: number, drift: boolean): void {
  const middle = (y: Float64Array): number => y.reduce((sum, v) => sum + v, 0) / y.length;
  const level = middle(value.subarray(0, before));
  const end = value.length - Math.max(3, Math.floor(value.length / 20));
  const from = middle(time.subarray(0, before));
  const span = drift && end > before ? middle(time.subarray(end)) - from : Number.POSITIVE_INFINITY;
  const slope = (middle(value.subarray(Math.max(end, 0))) - level) / span;
  for (let i = 0; i < value.length; i++) value[i] -= level + slope * (time[i] - from);
}
