import type { Injection, Reading, Trial } from "../model/trial.js";
import { dimensions, over, sameDimension } from "../units/dimension.js";
import { one, type Unit } from "../units/unit.js";
import { type CleanCurve, type CleanStep, cleanReading, productUnit } from "./clean.js";
import { distributionOf } from "./distribution.js";
import { type Figure, figure, type Known } from "./figure.js";
import { type Finding, finding } from "./finding.js";
import { closedPeclet, holdback, segregation } from "./indices.js";
import { gradeOf, hopeless, judgeEnds, judgeMean, judgeRecovery } from "./judge.js";
import { roughness } from "./noise.js";
import { momentsOf, pulseResponse, type RawMoments, type Response, stepResponse } from "./response.js";
import type { Tail } from "./tail.js";
import type { Rule } from "./weights.js";

/** What is known beside the trial, and how to integrate. What is not given leaves the figures out that need it. */
export interface MomentsOptions {
  /** The flow through the place of a reading on the day, m3/s. */
  readonly flowAt?: (at: string) => Known | undefined;
  /** Volume of the vessel, m3, and the whole flow through it, m3/s. */
  readonly volume?: Known | undefined;
  readonly throughflow?: Known | undefined;
  readonly rule?: Rule;
  /** The unit that times are shown in; that of the reading's own where left out. */
  readonly timeUnit?: Unit;
}

/** A reading without a model. Times count from the injection. */
export interface ReadingMoments {
  readonly at: string;
  readonly unit: Unit;
  readonly timeUnit: Unit;
  readonly area: Figure;
  readonly recovery: Figure;
  readonly mean: Figure;
  readonly variance: Figure;
  readonly skewness: Figure;
  readonly t10: Figure;
  readonly t50: Figure;
  readonly t90: Figure;
  /** morrill, tanks, peclet; with volume and flow: holdback, segregation, t10-over-tau, mean-over-tau; with flow: effective-volume. */
  readonly indices: Readonly<Record<string, Figure>>;
  readonly tail: Tail;
  /** What the extrapolated tail makes of each figure: fractions. */
  readonly tailShare: { readonly area: number; readonly mean: number; readonly variance: number };
  readonly noise: { readonly sd: Figure; readonly from: string };
  readonly steps: readonly CleanStep[];
  readonly curve: { readonly time: Float64Array; readonly E: Float64Array; readonly F: Float64Array } | undefined;
}

export interface MomentsResult {
  readonly readings: readonly ReadingMoments[];
  readonly grade: "A" | "B" | "C";
  readonly findings: readonly Finding[];
  /** What was looked for, or asked, and the data or documents do not give; in words. */
  readonly notSupported: readonly string[];
}

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
  const tailDoubt =
    response.tail.is === "exponential" ? Math.hypot(response.tail.levelError, response.tail.rateError) : 0;
  const meanError = error(found.gradient.mean, Math.abs(found.tail.mean * found.mean) * tailDoubt);
  const varianceError = error(found.gradient.variance, Math.abs(found.tail.variance * found.variance) * 2 * tailDoubt);
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

/** The curve to take moments of; for a step also how much of it came through. */
function seenResponse(
  { form }: Injection,
  reading: Reading,
  curve: CleanCurve,
  flow: Known | undefined,
  rule: Rule,
): { response: Response; recovered: number | undefined } | Finding {
  if (form.is !== "step") return { response: pulseResponse(curve, rule), recovered: undefined };
  const n = curve.value.length;
  const size = Math.max(2, Math.floor((n - curve.before) / 10));
  const [plateau, earlier] = [meanOf(curve.value, n - size, n), meanOf(curve.value, n - 2 * size, n - size)];
  const before = curve.before > 0 && !curve.baseline ? meanOf(curve.value, 0, curve.before) : 0;
  const trusted = reading.scale === "known";
  const from =
    trusted && form.from && sameDimension(form.from.dimension, curve.unit.dimension) ? form.from.of([]) : before;
  const level = form.level.of([]);
  const isLevel = sameDimension(form.level.dimension, curve.unit.dimension);
  const isRate = flow && sameDimension(over(form.level.dimension, dimensions.flow), curve.unit.dimension);
  const to = !trusted ? undefined : isLevel ? level : isRate ? level / flow.value : undefined;
  const noise = roughness(curve.time, curve.value);
  const rise = Math.abs(plateau - from);
  const settled = Math.abs(plateau - earlier) <= Math.max(2 * noise * Math.sqrt(2 / size), 2e-3 * rise);
  if (!settled && to === undefined) {
    return finding(
      "step-level",
      curve.at,
      `the last tenth still changes by ${Math.round((1000 * Math.abs(plateau - earlier)) / rise) / 10} % of the step`,
    );
  }
  const response = stepResponse(curve, { from, to: settled || to === undefined ? plateau : to }, rule);
  return { response, recovered: to === undefined || !settled ? undefined : (plateau - from) / (to - from) };
}

function meanOf(values: Float64Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += values[i];
  return sum / (to - from);
}

/** Moments of a measured inlet about the injection's own time; area in concentration times s. */
function inletMoments(injection: Injection, rule: Rule): RawMoments | undefined {
  if (injection.form.is !== "signal") return undefined;
  const { time, value } = injection.form.table;
  const since = time.map((t) => t - injection.start);
  const sd = new Float64Array(time.length).fill(roughness(since, value));
  const none = { mean: 0, variance: 0, third: 0 };
  const curve = { time: since, value, before: 0, noise: { sd, from: "roughness of the curve" as const }, added: none };
  return momentsOf(pulseResponse({ ...emptyCurve, ...curve }, rule));
}

const emptyCurve: CleanCurve = {
  at: "",
  time: new Float64Array(),
  value: new Float64Array(),
  unit: one,
  timeUnit: one,
  start: 0,
  before: 0,
  noise: { sd: new Float64Array(), from: "declared" },
  baseline: undefined,
  added: { mean: 0, variance: 0, third: 0 },
  steps: [],
};

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

/** Tracer seen over tracer given. */
function recoveryOf(
  { form }: Injection,
  reading: Reading,
  curve: CleanCurve,
  found: RawMoments,
  flow: Known | undefined,
  recovered: number | undefined,
  inlet: RawMoments | undefined,
): Figure {
  if (form.is === "step") return figure(recovered, one);
  if (reading.scale === "free") return figure(undefined, one);
  if (inlet) return figure(found.area / inlet.area, one);
  if (form.is !== "pulse" || !flow) return figure(undefined, one);
  const dose = form.amount.of([]);
  if (!sameDimension(over(form.amount.dimension, dimensions.volume), curve.unit.dimension))
    return figure(undefined, one);
  const recovery = (flow.value * found.area) / dose;
  const relative = Math.hypot((flow.sd ?? 0) / flow.value, (form.amount.sd?.([]) ?? 0) / dose);
  return figure(recovery, one, relative * recovery);
}

const whyNoRecovery = (reading: Reading, flow: Known | undefined): string =>
  reading.scale === "free"
    ? "`scale: free` trusts the shape only"
    : flow
      ? "the level of the step or the unit of the dose does not give it"
      : "no flow is known";

/** The one flow of a trial that names one only and reads one place: all of it passes there. */
function onlyFlow(trial: Trial): Known | undefined {
  const [flow] = [...trial.flows.values()];
  const places = new Set(trial.readings.map((r) => r.at));
  if (trial.flows.size !== 1 || places.size !== 1 || flow.uses.length > 0) return undefined;
  return { value: flow.of([]), sd: flow.sd?.([]) };
}

function tauOf({ volume, throughflow }: MomentsOptions, flow: Known | undefined): Known | undefined {
  const through = throughflow ?? flow;
  if (!volume || !through || !(through.value > 0) || !(volume.value > 0)) return undefined;
  const relative = Math.hypot((volume.sd ?? 0) / volume.value, (through.sd ?? 0) / through.value);
  const tau = volume.value / through.value;
  return { value: tau, sd: relative * tau };
}

/** A reading of which nothing can be said but why. */
function nothing(curve: CleanCurve, time: Unit): ReadingMoments {
  const none = (unit: Unit): Figure => figure(undefined, unit);
  return {
    at: curve.at,
    unit: curve.unit,
    timeUnit: time,
    area: none(productUnit(`${curve.unit.name} ${time.name}`, curve.unit, time)),
    recovery: none(one),
    mean: none(time),
    variance: none(productUnit(`${time.name}^2`, time, time)),
    skewness: none(one),
    t10: none(time),
    t50: none(time),
    t90: none(time),
    indices: {},
    tail: { is: "open", level: Number.NaN },
    tailShare: { area: 0, mean: 0, variance: 0 },
    noise: { sd: figure(curve.noise.sd[0], curve.unit), from: curve.noise.from },
    steps: curve.steps,
    curve: undefined,
  };
}
