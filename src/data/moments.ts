import type { Reading, Trial } from "../model/trial.js";
import { type Basis, basisOfFlow, inBasis } from "../units/basis.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { isUnitFault, parseUnit } from "../units/parse.js";
import { one, type Unit } from "../units/unit.js";
import { type CleanCurve, cleanReading, productUnit, takeOff } from "./clean.js";
import { type Figure, figure, type Known } from "./figure.js";
import { type Finding, finding } from "./finding.js";
import { effectiveVolume, spreadIndices, vesselIndices } from "./index-figures.js";
import { inletMoments } from "./inlet.js";
import { gradeOf, hopeless, judgeBaseline, judgeEnds, judgeMean, judgeRecovery } from "./judge.js";
import { judgeLog } from "./judge-log.js";
import { flowRange, overVolume, passedBy } from "./passed.js";
import { agesOf } from "./read-curve.js";
import { onlyFlow, recoveryOf, tauOf, whyNoRecovery } from "./recovery.js";
import { momentsOf } from "./response.js";
import { type MomentsOptions, type MomentsResult, noiseFigure, nothing, type ReadingMoments } from "./result.js";
import { seenResponse } from "./seen.js";
import { shapeOf } from "./shape.js";
import { judgeShape } from "./shape-rules.js";
import { type Sight, sightOf } from "./sight.js";
import type { Rule } from "./weights.js";

export type { MomentsOptions, MomentsResult, ReadingMoments } from "./result.js";

/** Reads every curve of a trial without a model: moments, percentiles, indices, and what can be said about the data. */
export function readMoments(trial: Trial, options: MomentsOptions = {}): MomentsResult {
  const findings: Finding[] = [];
  const notSupported: string[] = [];
  const readings: ReadingMoments[] = [];
  const without = options.closed
    ? "the vessel is closed: nothing leaves it, so it has no residence time; fit a network to its mixing"
    : trial.contents || trial.injections.length === 0
      ? "tracer was inside at the start, so the curve is no response to what was put in; fit a network to it"
      : undefined;
  if (without) return { readings, grade: gradeOf(findings, []), findings, notSupported: [without] };
  for (const reading of trial.readings) {
    const curve = cleanReading(trial, reading);
    if (curve) readings.push(readCurve(trial, reading, curve, options, findings, notSupported));
    else notSupported.push(`the reading at '${reading.at}' is a draft: it has no data`);
  }
  const together = allOutlets(trial, readings, options);
  if (together) findings.push(...judgeRecovery("all outlets", together));
  const graded = readings.map(({ recovery, expected, mean }) => ({
    recovery: together ? together.value : recovery.value && recovery.value / (expected ?? 1),
    mean,
  }));
  return { readings, grade: gradeOf(findings, graded), findings, notSupported };
}

/** What came out of all outlets of a vessel that has several, where all were read. */
function allOutlets(trial: Trial, readings: readonly ReadingMoments[], { wayOut }: MomentsOptions): Figure | undefined {
  const first = readings[0] && wayOut?.(readings[0].at);
  if (trial.injections[0]?.form.is === "step" || !first?.isOutlet || first.others.length === 0) return undefined;
  const outlets = [readings[0].at, ...first.others];
  const recovered = outlets.map((name) => readings.find((r) => r.at === name)?.recovery);
  if (readings.length !== outlets.length || !recovered.every((r) => r?.value !== undefined)) return undefined;
  const sum = recovered.reduce((total, r) => total + (r?.value ?? 0), 0);
  // Dose and flow meter are the same for all: their errors add up.
  const error = recovered.reduce((total, r) => total + (r && "standardError" in r ? (r.standardError ?? 0) : 0), 0);
  return figure(sum, one, error);
}

/** One cleaned curve. Findings and what is not supported are added to the lists given. */
export function readCurve(
  trial: Trial,
  reading: Reading,
  curve: CleanCurve,
  options: MomentsOptions,
  findings: Finding[],
  notSupported: string[],
): ReadingMoments {
  const injection = trial.injections[0];
  const mixed = reading.places.length > 1;
  const flow = mixed ? undefined : (options.flowAt?.(reading.at) ?? onlyFlow(trial));
  const whole = options.throughflow ?? flow;
  const rule = ruleFor(curve, options);
  const basis = basisOf(trial, options);
  const stop =
    (trial.injections.length > 1
      ? finding("several-injections", curve.at, `${trial.injections.length} injections`)
      : undefined) ?? hopeless(curve);
  const seen = stop ?? seenResponse(injection, reading, curve, whole, rule, dilutionOf(injection.at, options), basis);
  const found = "code" in seen ? seen : (momentsOf(seen.response) ?? finding("no-area", curve.at, "area of 0 or less"));
  if ("code" in seen || "code" in found) {
    findings.push("code" in found ? found : (seen as Finding));
    return nothing(curve, options.timeUnit ?? curve.timeUnit);
  }
  const { response, recovered } = seen;
  findings.push(...judgeEnds(curve, response, found, reading.baseline !== "none"));
  findings.push(...judgeLog(trial, reading, curve, response, found));

  const time = options.timeUnit ?? curve.timeUnit;
  const time2 = productUnit(`${time.name}^2`, time, time);
  const volumeUnit = volumeUnitOf(trial, options);
  const inlet = injection.form.is === "signal" ? inletMoments(injection, rule) : undefined;
  const own = sightOf(curve, response, found, rule, inlet);
  const { errors, known, mean, variance, third } = own;
  const skew = variance > 0 ? third / variance ** 1.5 : undefined;
  const meanFigure = figure(known ? mean : undefined, time, errors.mean);
  const varianceFigure = figure(known && variance > 0 ? variance : undefined, time2, errors.variance);
  findings.push(...judgeBaseline(curve, found, errors.mean));
  const way = mixed ? { isOutlet: false, share: 0, others: [] } : options.wayOut?.(reading.at);
  const alone = !way || (way.isOutlet && way.others.length === 0);
  const unseen = way?.others.filter((name) => !trial.readings.some((r) => r.at === name)) ?? [];
  const expected = alone || injection.form.is === "step" || !way?.isOutlet ? undefined : way.share;
  const passed = passedBy(trial, curve, options.feeds);
  // With a flow that varied a vessel of constant volume sees volumes, not times.
  const aged = passed && alone && !inlet ? agedSight(trial, reading, overVolume(curve, passed), whole, options) : own;
  if (passed) {
    findings.push(finding("flow-varied", curve.at, flowRange(passed, volumeUnit, time)));
    if (!aged || aged === own)
      notSupported.push(
        `recovery and effective volume at '${curve.at}': the flow varied, and ${inlet ? "the inlet was measured" : alone ? "over volumes the curve has no area" : "not all of it passes here"}; fit a network`,
      );
  }
  const byVolume = passed && aged && aged !== own ? aged : undefined;
  const through = byVolume ? { value: 1, sd: passed?.unsure } : passed ? undefined : flow;
  const { found: counted, errors: unsure } = byVolume ?? own;
  const recovery =
    passed && inlet
      ? figure(undefined, one)
      : recoveryOf(injection, reading, curve, counted, through, recovered, inlet, unsure.area, basis);
  // Outlets that were all read are judged together.
  if (expected === undefined || unseen.length > 0)
    findings.push(...judgeRecovery(curve.at, recovery, expected, expected === undefined ? [] : unseen));
  if (inlet)
    notSupported.push(
      `percentiles and indices at '${curve.at}': a measured inlet gives moments only; fit a network for the curve`,
    );
  if (recovery.value === undefined && (!passed || byVolume))
    notSupported.push(`recovery at '${curve.at}': ${whyNoRecovery(reading, flow)}`);

  const tau =
    !alone || options.follows || (passed && !byVolume) ? undefined : byVolume ? options.volume : tauOf(options, flow);
  if (options.follows)
    notSupported.push(
      `effective volume, holdback, segregation and dead volume at '${curve.at}': the tracer divides as '${options.follows}' does, not as the liquid`,
    );
  else if (!alone)
    notSupported.push(
      `effective volume, holdback, segregation and dead volume at '${curve.at}': ${way.isOutlet ? `liquid leaves by ${way.others.join(", ")}, too` : mixed ? "it is a mix of several places" : "it is not the outlet of the vessel"}`,
    );
  else if (!tau)
    notSupported.push(
      `holdback, segregation and dead volume at '${curve.at}': ${options.guessed ? "the volume hangs on parameters that a fit has yet to find: what the file begins with is no fact" : "the volume or the flow is not known"}`,
    );
  else {
    const seenMean = byVolume
      ? figure(byVolume.known ? byVolume.mean : undefined, volumeUnit, byVolume.errors.mean)
      : meanFigure;
    const beyond = Math.abs(counted.tail.area);
    findings.push(...judgeMean(curve.at, seenMean, tau, byVolume ? volumeUnit : time, beyond, byVolume !== undefined));
  }
  // A tail that noise leaves open by a little says nothing against the shape of the rest.
  const shaped = byVolume ?? own;
  const { tail, value } = shaped.response;
  const nearlyClosed = tail.is === "open" && tail.level < 0.03 * value.reduce((m, c) => Math.max(m, c), 0);
  const shape = inlet || !(shaped.known || nearlyClosed) ? undefined : shapeOf(shaped);
  if (shape) {
    const judged = judgeShape(shape, byVolume ? volumeUnit : time);
    findings.push(...judged.findings);
    notSupported.push(...judged.not);
  }
  const steps = [...curve.steps];
  if (inlet) takeOff(steps, "measured inlet", inlet.mean, inlet.variance);
  const last = steps[steps.length - 1];
  steps.push({
    ...last,
    name: "front and tail",
    area: response.is === "density" ? found.area : last.area,
    mean: meanFigure.value,
    variance: varianceFigure.value,
    t10: own.at(0.1),
    ...(curve.added.mean > 0 ? { approximate: true } : {}),
  });
  const percentile = (p: number): Figure => own.percentile(p, time);
  const acrossAll = byVolume ? { value: 1, sd: passed?.unsure } : passed ? undefined : whole;
  const indices: Record<string, Figure> = {
    ...spreadIndices(shaped),
    ...(acrossAll && alone ? { "effective-volume": effectiveVolume(acrossAll, shaped, volumeUnit) } : {}),
    ...(tau ? vesselIndices(shaped, tau, inlet !== undefined) : {}),
  };
  return {
    at: curve.at,
    unit: curve.unit,
    timeUnit: time,
    area: figure(
      found.area,
      response.is === "density" ? productUnit(`${curve.unit.name} ${time.name}`, curve.unit, time) : one,
      errors.area,
    ),
    recovery,
    expected,
    mean: meanFigure,
    variance: varianceFigure,
    skewness: figure(known ? skew : undefined, one, errors.skewness),
    t10: percentile(0.1),
    t16: percentile(0.16),
    t50: percentile(0.5),
    t84: percentile(0.84),
    t90: percentile(0.9),
    percentilesShifted: curve.added.mean > 0,
    indices,
    tail: response.tail,
    tailShare: found.tail,
    noise: noiseFigure(curve),
    steps,
    curve: agesOf(own.F, own.error, known ? mean : undefined),
  };
}

/** The curve over the volume that has passed; undefined where it has no area. */
function agedSight(
  trial: Trial,
  reading: Reading,
  curve: CleanCurve,
  whole: Known | undefined,
  options: MomentsOptions,
): Sight | undefined {
  const injection = trial.injections[0];
  const rule = ruleFor(curve, options);
  const dilution = dilutionOf(injection.at, options);
  const seen = seenResponse(injection, reading, curve, whole, rule, dilution, basisOf(trial, options));
  const found = "code" in seen ? undefined : momentsOf(seen.response);
  return "code" in seen || !found ? undefined : sightOf(curve, seen.response, found, rule, undefined);
}

/** What flows count: as the vessel has it; else as the day's flow is written. */
export function basisOf(trial: Trial, { volumeUnit }: MomentsOptions): Basis {
  if (volumeUnit) return sameDimension(volumeUnit.dimension, dimensions.mass) ? "mass" : "volume";
  const [flow] = [...trial.flows.values()];
  return flow ? basisOfFlow(flow.dimension) : "volume";
}

/** The unit asked for; else that of the day's flow, whose name begins with it; else the liter. */
function volumeUnitOf(trial: Trial, options: MomentsOptions): Unit {
  if (options.volumeUnit) return options.volumeUnit;
  const [flow] = [...trial.flows.values()];
  const found = parseUnit(flow?.unit?.name.split("/")[0] ?? "L");
  const held = inBasis(dimensions.volume, basisOf(trial, options));
  return !isUnitFault(found) && sameDimension(found.dimension, held) ? found : liter;
}

const liter: Unit = { name: "L", factor: 1e-3, offset: 0, dimension: dimensions.volume };

/** A level dosed into one of several feeds comes out thinned by the others. */
export function dilutionOf(at: string, { feeds }: MomentsOptions): number {
  const own = feeds?.get(at);
  return own === undefined || !feeds ? 1 : own / [...feeds.values()].reduce((sum, f) => sum + f, 0);
}

/** Readings under which no curve between them is to be had: their moments are summed by trapezoids, as worked examples do. */
const fewForCurves = 30;

const ruleFor = (curve: CleanCurve, { rule }: MomentsOptions): Rule =>
  rule ?? (curve.time.length < fewForCurves ? "trapezoid" : "cubic");
