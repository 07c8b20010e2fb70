import type { Calibration, Correlated, Reading, Series } from "../model/trial.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, itemsOf, type MapNode, type Tree, textOf } from "../read/tree.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { formatQuantity } from "../units/format.js";
import { one, type Unit } from "../units/unit.js";
import { resolveCalibration, sameSignal } from "./calibration.js";
import { certain } from "./certain.js";
import { resolveDetectorValue } from "./detector.js";
import { resolvePlaces } from "./places.js";
import { aboveZero } from "./sign.js";
import { censor, correct, resolveCounting, resolveLimits, type Staged } from "./stages.js";
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
  files: Files,
  report: Report,
): Reading | undefined {
  const drawn = resolvePlaces(child(node, "at"), report);
  const line = child(node, "line");
  const delay = resolveValue(child(line, "delay"), dimensions.time, emptyScope, report);
  const lag = resolveValue(child(line, "lag"), dimensions.time, emptyScope, report);
  const raw = table?.valueUnit;
  const calibration = resolveCalibration(child(node, "calibration"), raw, files, report);
  if (calibration === "faulty" || !drawn) return undefined;
  const unit = calibration?.perUnit ?? raw ?? draftUnit(node, planned);
  const noise = resolveNoise(child(node, "noise"), unit, raw, calibration, report);
  const limits = resolveLimits(child(node, "limits"), unit, calibration, report);
  const leaveOut = resolveLeaveOut(child(node, "leave-out"), table?.series, clock, report);
  const correlated = resolveCorrelated(child(node, "correlated"), report);
  const right =
    correlated !== "faulty" &&
    aboveZero("the delay of a sample line", delay, true, report) &&
    aboveZero("the lag of a detector", lag, true, report);
  if (!right || noise === "faulty" || limits === "faulty") return undefined;
  const staged = table ? correct(table.series, node, calibration, noise?.counting, report) : draft;
  if (!staged) return undefined;
  const value = staged.stages[staged.stages.length - 1]?.value ?? table?.series.value;
  if (table && calibration?.range) warnBeyond(table.series, staged, calibration, limits, node, report);
  const baseline = textOf(node, "baseline");
  return {
    at: drawn.at,
    where: child(node, "at")?.at ?? node.at,
    places: drawn.places,
    series: table?.series,
    ...staged,
    censored: value && censor(value, limits),
    limits,
    calibration,
    baseline: baseline === "constant" || baseline === "drift" ? baseline : "none",
    scale: textOf(node, "scale") === "free" ? "free" : "known",
    line: { delay, lag },
    noise,
    ...(correlated ? { correlated } : {}),
    leaveOut,
    unit,
  };
}

/** `correlated:` a word or a time. */
function resolveCorrelated(node: Tree | undefined, report: Report): Correlated | undefined | "faulty" {
  if (node?.type !== "scalar") return undefined;
  const word = node.text;
  if (word === "no" || word === "fitted") return word;
  const time = resolveValue(node, dimensions.time, emptyScope, report);
  if (!time || !aboveZero("a correlation time", time, false, report)) return "faulty";
  return { time: time.of([]) };
}

/** What stands for a reading whose file or settings cannot be used, once the reason is reported: the places it draws from. */
export function unreadable(node: MapNode): Reading {
  const drawn = resolvePlaces(child(node, "at"), () => {});
  return {
    at: drawn?.at ?? "",
    where: child(node, "at")?.at ?? node.at,
    places: drawn?.places ?? [],
    series: undefined,
    ...draft,
    censored: undefined,
    limits: { below: undefined, above: undefined },
    calibration: undefined,
    baseline: "none",
    scale: "free", // in what unit it would be nobody knows
    line: { delay: undefined, lag: undefined },
    noise: undefined,
    leaveOut: [],
    unit: one,
  };
}

/** A draft is in the unit of its noise or limits, where they are concentrations. */
function draftUnit(node: MapNode, planned: Unit): Unit {
  const silent: Report = () => {};
  const said = [
    child(child(node, "noise"), "floor"),
    child(child(node, "limits"), "above"),
    child(child(node, "limits"), "below"),
  ];
  for (const written of said) {
    const unit = resolveDetectorValue(written, false, silent)?.unit;
    if (written && unit && sameDimension(unit.dimension, planned.dimension)) return unit;
  }
  return planned;
}

const draft: Staged = { stages: [], doubts: [] };

/** Readings that no standard covers are told; those beyond the declared limits are not believed anyway. */
function warnBeyond(
  series: Series,
  { stages }: Staged,
  { range, rawUnit }: Calibration,
  { below, above }: Reading["limits"],
  node: MapNode,
  report: Report,
): void {
  if (!range) return;
  const calibrated = stages[stages.length - 1].value;
  const raw = stages[stages.length - 2]?.value ?? series.value;
  const slack = 0.02 * (range[1] - range[0]);
  const beyond = [...raw.keys()].filter(
    (i) =>
      raw[i] > range[1] + slack &&
      (above === undefined || calibrated[i] < above) &&
      (below === undefined || calibrated[i] > below),
  );
  if (beyond.length === 0) return;
  const most = beyond.reduce((top, i) => Math.max(top, raw[i]), range[1]);
  report("standards-exceeded", child(node, "calibration")?.at ?? node.at, {
    points: beyond.length,
    most: formatQuantity(most, rawUnit),
    last: formatQuantity(range[1], rawUnit),
  });
}

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
  const counting = resolveCounting(child(node, "counting"), raw, report);
  if ((floorNode && !written) || (relativeNode && !relative) || counting === "faulty") return "faulty";
  if (!aboveZero("the floor of the noise", written, true, report)) return "faulty";
  if (!aboveZero("the relative noise", relative, true, report)) return "faulty";
  certain("the floor of the noise", written, report);
  certain("the relative noise", relative, report);
  let floor = written;
  if (written && !sameDimension(written.dimension, unit.dimension)) {
    if (!calibration || !sameSignal(written, calibration.rawUnit)) {
      report("reading-unit", written.at, {
        what: "`floor`",
        unit: written.unit?.name || "no unit",
        reading: unit.name,
      });
      return "faulty";
    }
    const slope = Math.abs(calibration.slope(calibration.raw(0)));
    floor = { ...written, dimension: unit.dimension, unit, of: (env) => written.of(env) * slope };
  }
  return { floor, relative: relative?.of([]), ...(counting ? { counting } : {}) };
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
