import type { Reading, Trial } from "../model/trial.js";
import { dimensions } from "../units/dimension.js";
import { one, type Unit } from "../units/unit.js";
import { type CleanCurve, cleanReading, productUnit } from "./clean.js";
import { distributionOf } from "./distribution.js";
import { type Figure, figure } from "./figure.js";
import { type Finding, finding } from "./finding.js";
import { closedPeclet, holdback, segregation } from "./indices.js";
import { inletMoments } from "./inlet.js";
import { gradeOf, hopeless, judgeEnds, judgeMean, judgeRecovery } from "./judge.js";
import { onlyFlow, recoveryOf, tauOf, whyNoRecovery } from "./recovery.js";
import { momentsOf, type Response } from "./response.js";
import { type MomentsOptions, type MomentsResult, nothing, type ReadingMoments } from "./result.js";
import { seenResponse } from "./seen.js";

export type { MomentsOptions, MomentsResult, ReadingMoments } from "./result.js";

/** Reads every curve of a trial without a model: moments, percentiles, indices, and what can be said about the data. */
export function readMoments(trial: Trial, options: MomentsOptions = {}): MomentsResult {
  const findings: Finding[] = [];
  const notSupported: string[] = [];
  const readings: ReadingMoments[] = [];
  for (const reading of trial.readings) {
    const curve = cleanReading(trial, reading);
    if (curve) readings.push(readCurve(trial, reading, curve, options, findings, notSupported));
    else notSupported.push(`the reading at '${reading.at}' is a draft: it has no data`);
  }
  const recovery = readings.map((r) => r.recovery);
  return { readings, grade: gradeOf(findings, recovery), findings, notSupported };
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
  const flow = options.flowAt?.(reading.at) ?? onlyFlow(trial);
  const stop =
    (trial.injections.length > 1
      ? finding("several-injections", curve.at, `${trial.injections.length} injections`)
      : undefined) ?? hopeless(curve);
  const seen = stop ?? seenResponse(injection, reading, curve, flow, options.rule ?? "trapezoid");
  const found = "code" in seen ? seen : (momentsOf(seen.response) ?? finding("no-area", curve.at, "area of 0 or less"));
  if ("code" in seen || "code" in found) {
    findings.push("code" in found ? found : (seen as Finding));
    return nothing(curve, options.timeUnit ?? curve.timeUnit);
  }
  const { response, recovered } = seen;
  findings.push(...judgeEnds(curve, response, found, reading.baseline !== "none"));

  const time = options.timeUnit ?? curve.timeUnit;
  const time2 = productUnit(`${time.name}^2`, time, time);
  const inlet = injection.form.is === "signal" ? inletMoments(injection, options.rule ?? "trapezoid") : undefined;
  const mean = found.mean - curve.added.mean - (inlet?.mean ?? 0);
  const variance = found.variance - curve.added.variance - (inlet?.variance ?? 0);
  const third = found.third - curve.added.third - (inlet?.third ?? 0);
  const known = response.tail.is === "closed" || response.tail.is === "exponential";
  const error = (gradient: Float64Array, beyond: number): number =>
    Math.hypot(errorOf(gradient, response, curve), beyond);
  const meanError = error(found.gradient.mean, found.tailError.mean);
  const varianceError = error(found.gradient.variance, found.tailError.variance);
  const skew = variance > 0 ? third / variance ** 1.5 : undefined;
  const skewGradient = found.gradient.third.map(
    (g, i) => g / variance ** 1.5 - (1.5 * third * found.gradient.variance[i]) / variance ** 2.5,
  );

  const F = distributionOf(response, found);
  const at = (p: number): number | undefined => (inlet ? undefined : shifted(F.quantile(p), curve.added.mean));
  const [t10, t50, t90] = [at(0.1), at(0.5), at(0.9)];
  const meanFigure = figure(known ? mean : undefined, time, meanError);
  const varianceFigure = figure(known && variance > 0 ? variance : undefined, time2, varianceError);
  const recovery = recoveryOf(injection, reading, curve, found, flow, recovered, inlet);
  findings.push(...judgeRecovery(curve.at, recovery));
  if (inlet)
    notSupported.push(
      `percentiles and indices at '${curve.at}': a measured inlet gives moments only; fit a network for the curve`,
    );
  if (recovery.value === undefined) notSupported.push(`recovery at '${curve.at}': ${whyNoRecovery(reading, flow)}`);

  const tau = tauOf(options, flow);
  if (!tau)
    notSupported.push(`holdback, segregation and dead volume at '${curve.at}': the volume or the flow is not known`);
  else findings.push(...judgeMean(curve.at, meanFigure, tau, time, Math.abs(found.tail.area)));
  const relative = variance / mean ** 2;
  const indices: Record<string, Figure> = {
    morrill: figure(t10 !== undefined && t90 !== undefined && t10 > 0 ? t90 / t10 : undefined, one),
    tanks: figure(known && variance > 0 ? 1 / relative : undefined, one),
    peclet: figure(known ? closedPeclet(relative) : undefined, one),
    ...(flow
      ? {
          "effective-volume": figure(
            known ? flow.value * mean : undefined,
            liter,
            known ? flow.value * meanError : undefined,
          ),
        }
      : {}),
    ...(tau && !inlet
      ? {
          holdback: figure(known ? holdback(F, tau.value) : undefined, one),
          segregation: figure(known ? segregation(F, tau.value) : undefined, one),
          "t10-over-tau": figure(t10 === undefined ? undefined : t10 / tau.value, one),
        }
      : {}),
    ...(tau
      ? {
          "mean-over-tau": figure(
            known ? mean / tau.value : undefined,
            one,
            Math.hypot(meanError / tau.value, ((tau.sd ?? 0) * mean) / tau.value ** 2),
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
    ),
    recovery,
    mean: meanFigure,
    variance: varianceFigure,
    skewness: figure(known ? skew : undefined, one, error(skewGradient, 0)),
    t10: figure(t10, time),
    t50: figure(t50, time),
    t90: figure(t90, time),
    indices,
    tail: response.tail,
    tailShare: found.tail,
    noise: { sd: figure(curve.noise.sd[0], curve.unit), from: curve.noise.from },
    steps: curve.steps,
    curve: { time: F.time, E: F.E, F: F.F },
  };
}

const liter: Unit = { name: "L", factor: 1e-3, offset: 0, dimension: dimensions.volume };

const shifted = (t: number | undefined, by: number): number | undefined => (t === undefined ? undefined : t - by);

/** One standard error of a figure with this gradient by each point: scatter of points, and of the baseline under all. */
function errorOf(gradient: Float64Array, { sd, time, is }: Response, { baseline }: CleanCurve): number {
  let [points, level, slope] = [0, 0, 0];
  for (let i = 0; i < gradient.length; i++) {
    points += (gradient[i] * sd[i]) ** 2;
    level += gradient[i];
    slope += gradient[i] * (time[i] - (baseline?.middle ?? 0));
  }
  if (!baseline || is === "washout") return Math.sqrt(points);
  return Math.sqrt(points + (level * baseline.levelError) ** 2 + (slope * baseline.slopeError) ** 2);
}
