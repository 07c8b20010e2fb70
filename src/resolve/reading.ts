import type { Calibration, Reading, Series } from "../model/trial.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, itemsOf, type MapNode, type Tree, textOf } from "../read/tree.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import { resolveDetectorValue } from "./detector.js";
import { aboveZero } from "./sign.js";
import type { TrialClock } from "./trial-clock.js";
import type { ResolvedTable } from "./trial-table.js";
import { emptyScope, resolveValue } from "./value.js";

/**
 * One reading of a trial, its series on the trial's clock.
 * @param table   what its file holds; undefined for a draft
 * @param planned the unit of concentration of a draft without calibration
 */
export function resolveReading(
  node: MapNode,
  table: ResolvedTable | undefined,
  clock: TrialClock,
  planned: Unit,
  report: Report,
): Reading | undefined {
  const at = child(node, "at");
  const line = child(node, "line");
  const delay = resolveValue(child(line, "delay"), dimensions.time, emptyScope, report);
  const lag = resolveValue(child(line, "lag"), dimensions.time, emptyScope, report);
  const raw = table?.valueUnit;
  const calibration = resolveCalibration(child(node, "calibration"), raw, report);
  if (calibration === "faulty" || at?.type !== "scalar") return undefined;
  const unit = calibration?.perUnit ?? raw ?? planned;
  const noise = resolveNoise(child(node, "noise"), unit, raw, calibration, report);
  const leaveOut = resolveLeaveOut(child(node, "leave-out"), table?.series, clock, report);
  const right =
    aboveZero("the delay of a sample line", delay, true, report) &&
    aboveZero("the lag of a detector", lag, true, report);
  if (!right || noise === "faulty") return undefined;
  const baseline = textOf(node, "baseline");
  return {
    at: at.text,
    where: at.at,
    series: table?.series,
    calibration,
    baseline: baseline === "constant" || baseline === "drift" ? baseline : "none",
    scale: textOf(node, "scale") === "free" ? "free" : "known",
    line: { delay, lag },
    noise,
    leaveOut,
    unit,
  };
}

/** `calibration:`; undefined where there is none, "faulty" where it is wrong and reported. */
export function resolveCalibration(
  node: Tree | undefined,
  raw: Unit | undefined,
  report: Report,
): Calibration | undefined | "faulty" {
  if (!node) return undefined;
  const blank = resolveDetectorValue(child(node, "blank"), true, report);
  const rise = resolveDetectorValue(child(node, "rise"), true, report);
  const per = resolveDetectorValue(child(node, "per"), false, report);
  if (!rise || !per?.unit || (child(node, "blank") && !blank)) return "faulty";
  let right = aboveZero("the concentration `per`", per, false, report);
  const signal = raw ?? rise.unit;
  for (const [what, value] of [
    ["`blank`", blank],
    ["`rise`", rise],
  ] as const) {
    if (!value || !signal || sameSignal(value, signal)) continue;
    report("reading-unit", value.at, { what, unit: value.unit?.name || "no unit", reading: signal.name });
    right = false;
  }
  // A rise may be negative: some detectors fall with concentration.
  if (rise.of([]) === 0) {
    report("rise-zero", rise.at, {});
    right = false;
  }
  return right ? { blank: blank?.of([]) ?? 0, rise: rise.of([]), per: per.of([]), perUnit: per.unit } : "faulty";
}

/** Detectors' own words are one dimension: only the same word is the same unit. */
const sameSignal = (value: Value, unit: Unit): boolean =>
  sameDimension(value.dimension, unit.dimension) &&
  (!sameDimension(unit.dimension, dimensions.signal) || value.unit?.name === unit.name);

function resolveNoise(
  node: Tree | undefined,
  unit: Unit,
  raw: Unit | undefined,
  calibration: Calibration | undefined,
  report: Report,
): Reading["noise"] | "faulty" {
  if (!node) return undefined;
  const floorNode = child(node, "floor");
  const relativeNode = child(node, "relative");
  const written = resolveDetectorValue(floorNode, true, report);
  const relative = resolveValue(relativeNode, dimensions.ratio, emptyScope, report);
  if ((floorNode && !written) || (relativeNode && !relative)) return "faulty";
  if (!aboveZero("the floor of the noise", written, true, report)) return "faulty";
  if (!aboveZero("the relative noise", relative, true, report)) return "faulty";
  let floor = written;
  if (written && !sameDimension(written.dimension, unit.dimension)) {
    if (!calibration || !raw || !sameSignal(written, raw)) {
      report("reading-unit", written.at, {
        what: "`floor`",
        unit: written.unit?.name || "no unit",
        reading: unit.name,
      });
      return "faulty";
    }
    const slope = Math.abs(calibration.per / calibration.rise);
    floor = { ...written, dimension: unit.dimension, unit, of: (env) => written.of(env) * slope };
  }
  return { floor, relative: relative?.of([]) };
}

/** `leave-out:` on the trial's clock; warns of stretches that no point lies in. */
export function resolveLeaveOut(
  node: Tree | undefined,
  series: Series | undefined,
  clock: TrialClock,
  report: Report,
): Reading["leaveOut"] {
  return itemsOf(node).flatMap((item) => {
    const [fromNode, toNode] = [child(item, "from"), child(item, "to")];
    if (!fromNode || !toNode) return [];
    const from = clock.time(fromNode, report);
    const to = clock.time(toNode, report);
    if (from === undefined || to === undefined) return [];
    const shown = { from: clock.show(from), to: clock.show(to) };
    if (to < from) report("leave-out-reversed", toNode.at, shown);
    else if (series && !series.time.some((t) => t >= from && t <= to)) report("leave-out-nothing", item.at, shown);
    return [{ from, to, because: textOf(item, "because") ?? "", at: item.at }];
  });
}
