import type { Reading, Trial } from "../model/trial.js";
import { type Basis, basisOfFlow, inBasis } from "../units/basis.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { isUnitFault, parseUnit } from "../units/parse.js";
import { one, type Unit } from "../units/unit.js";
import { type CleanCurve, cleanReading, productUnit, takeOff } from "./clean.js";
import { distributionOf } from "./distribution.js";
import { momentErrors } from "./error.js";
import { type Figure, figure, type Known } from "./figure.js";
import { type Finding, finding } from "./finding.js";
import { areaError, closedPeclet, efficiency, holdback, meanOver, segregation, slopeOf } from "./indices.js";
import { inletMoments } from "./inlet.js";
import { gradeOf, hopeless, judgeBaseline, judgeEnds, judgeMean, judgeRecovery } from "./judge.js";
import { judgeLog } from "./judge-log.js";
import { varianceOfSum } from "./persistence.js";
import { agesOf, percentileError } from "./read-curve.js";
import { onlyFlow, recoveryOf, tauOf, whyNoRecovery } from "./recovery.js";
import { momentsOf } from "./response.js";
import { type MomentsOptions, type MomentsResult, noiseFigure, nothing, type ReadingMoments } from "./result.js";
import { seenResponse } from "./seen.js";
import { shapeOf, washoutError } from "./shape.js";
import { judgeShape } from "./shape-rules.js";

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
  const rule = options.rule ?? "trapezoid";
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
  const inlet = injection.form.is === "signal" ? inletMoments(injection, rule) : undefined;
  const mean = found.mean - curve.added.mean - (inlet?.mean ?? 0);
  const variance = found.variance - curve.added.variance - (inlet?.variance ?? 0);
  const third = found.third - curve.added.third - (inlet?.third ?? 0);
  const known = response.tail.is === "closed" || response.tail.is === "exponential";
  const errors = momentErrors(curve, response, found, rule);
  const skew = variance > 0 ? third / variance ** 1.5 : undefined;

  const F = distributionOf(response, found);
  const at = (p: number): number | undefined => (inlet ? undefined : shifted(F.quantile(p), curve.added.mean));
  const [t10, t90] = [at(0.1), at(0.9)];
  const meanFigure = figure(known ? mean : undefined, time, errors.mean);
  const varianceFigure = figure(known && variance > 0 ? variance : undefined, time2, errors.variance);
  findings.push(...judgeBaseline(curve, found, errors.mean));
  const way = mixed ? { isOutlet: false, share: 0, others: [] } : options.wayOut?.(reading.at);
  const alone = !way || (way.isOutlet && way.others.length === 0);
  const unseen = way?.others.filter((name) => !trial.readings.some((r) => r.at === name)) ?? [];
  const expected = alone || injection.form.is === "step" || !way?.isOutlet ? undefined : way.share;
  const recovery = recoveryOf(injection, reading, curve, found, flow, recovered, inlet, errors.area, basis);
  // Outlets that were all read are judged together.
  if (expected === undefined || unseen.length > 0)
    findings.push(...judgeRecovery(curve.at, recovery, expected, expected === undefined ? [] : unseen));
  if (inlet)
    notSupported.push(
      `percentiles and indices at '${curve.at}': a measured inlet gives moments only; fit a network for the curve`,
    );
  if (recovery.value === undefined) notSupported.push(`recovery at '${curve.at}': ${whyNoRecovery(reading, flow)}`);

  const tau = alone && !options.follows ? tauOf(options, flow) : undefined;
  if (options.follows)
    notSupported.push(
      `effective volume, holdback, segregation and dead volume at '${curve.at}': the tracer divides as '${options.follows}' does, not as the liquid`,
    );
  else if (!alone)
    notSupported.push(
      `effective volume, holdback, segregation and dead volume at '${curve.at}': ${way.isOutlet ? `liquid leaves by ${way.others.join(", ")}, too` : mixed ? "it is a mix of several places" : "it is not the outlet of the vessel"}`,
    );
  else if (!tau)
    notSupported.push(`holdback, segregation and dead volume at '${curve.at}': the volume or the flow is not known`);
  else findings.push(...judgeMean(curve.at, meanFigure, tau, time, Math.abs(found.tail.area)));
  // A tail that noise leaves open by a little says nothing against the shape of the rest.
  const { tail } = response;
  const nearlyClosed = tail.is === "open" && tail.level < 0.03 * response.value.reduce((m, c) => Math.max(m, c), 0);
  const shape =
    inlet || !(known || nearlyClosed)
      ? undefined
      : shapeOf(curve, response, F, found.mean, variance / mean ** 2, found.area);
  if (shape) {
    const judged = judgeShape(shape, time);
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
    t10,
    ...(curve.added.mean > 0 ? { approximate: true } : {}),
  });
  const relative = variance / mean ** 2;
  const seenError = washoutError(response, found.area, curve);
  // What baseline and tail leave open of the area, beside the noise of the points, moves every share of it.
  const byNoise = Math.sqrt(varianceOfSum(found.gradient.area, response.sd, response.time, curve.noise.persistence));
  const unsure = Math.sqrt(Math.max(0, errors.area ** 2 - byNoise ** 2)) / found.area;
  const percentile = (p: number): Figure => figure(at(p), time, percentileError(F, seenError, F.quantile(p), unsure));
  const error10 = percentileError(F, seenError, F.quantile(0.1), unsure);
  const error90 = percentileError(F, seenError, F.quantile(0.9), unsure);
  const times = tau && { ...tau, error: meanOver(F.time, seenError, tau.value) + unsure };
  const indices: Record<string, Figure> = {
    morrill: figure(
      t10 !== undefined && t90 !== undefined && t10 > 0 ? t90 / t10 : undefined,
      one,
      ((t90 ?? 0) / (t10 ?? 1)) *
        Math.hypot((error10 ?? Number.NaN) / (t10 ?? 1), (error90 ?? Number.NaN) / (t90 ?? 1)),
    ),
    tanks: figure(known && variance > 0 ? 1 / relative : undefined, one, errors.relative / relative ** 2),
    peclet: figure(known ? closedPeclet(relative) : undefined, one, slopeOf(closedPeclet, relative) * errors.relative),
    ...(whole && alone
      ? {
          "effective-volume": effectiveVolume(
            whole,
            known ? mean : undefined,
            errors.mean,
            volumeUnitOf(trial, options),
          ),
        }
      : {}),
    ...(times && !inlet
      ? {
          holdback: figure(
            known ? holdback(F, times.value) : undefined,
            one,
            areaError((t) => holdback(F, t), times),
          ),
          segregation: figure(
            known ? segregation(F, times.value) : undefined,
            one,
            areaError((t) => segregation(F, t), times),
          ),
          "t10-over-tau": figure(
            t10 === undefined ? undefined : t10 / times.value,
            one,
            Math.hypot(error10 ?? Number.NaN, ((times.sd ?? 0) * (t10 ?? 0)) / times.value) / times.value,
          ),
          ...(response.is === "density" ? { "hydraulic-efficiency": efficiency(response, times) } : {}),
        }
      : {}),
    ...(tau
      ? {
          "mean-over-tau": figure(
            known ? mean / tau.value : undefined,
            one,
            Math.hypot(errors.mean / tau.value, ((tau.sd ?? 0) * mean) / tau.value ** 2),
          ),
        }
      : {}),
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
    curve: agesOf(F, seenError, known ? mean : undefined),
  };
}

/** Flow times mean: what takes part, at the one outlet of a vessel (errors of flow and mean carried). */
function effectiveVolume(flow: Known, mean: number | undefined, meanError: number, unit: Unit): Figure {
  if (mean === undefined) return figure(undefined, unit);
  return figure(flow.value * mean, unit, Math.hypot(flow.value * meanError, (flow.sd ?? 0) * mean));
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

const shifted = (t: number | undefined, by: number): number | undefined => (t === undefined ? undefined : t - by);
