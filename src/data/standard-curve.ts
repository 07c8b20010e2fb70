import type { Reading, Trial } from "../model/trial.js";
import { random } from "../numerics/random.js";
import { type CleanCurve, cleanReading } from "./clean.js";
import { distributionOf } from "./distribution.js";
import { momentErrors } from "./error.js";
import type { Figure, Known } from "./figure.js";
import { hopeless } from "./judge.js";
import { basisOf, dilutionOf } from "./moments.js";
import type { Noise } from "./noise.js";
import { onlyFlow, recoveryOf } from "./recovery.js";
import { redrawing, shortened } from "./redraw.js";
import { momentsOf, type RawMoments, type Response } from "./response.js";
import type { MomentsOptions } from "./result.js";
import { seenResponse } from "./seen.js";
import { thresholds } from "./thresholds.js";

const limit = thresholds.across;

/** Ages at which curves are compared, in half times. */
export const ages = Float64Array.from({ length: 150 }, (_, i) => 15 * ((i + 1) / 150) ** 1.7);

/** A curve counted in its own half time, the time by which half has left, with what is unsure of it. */
export interface StandardCurve {
  /** Share that has left, at `ages`. */
  readonly F: Float64Array;
  /** What sampling, a slow detector and a long injection may make of F, at `ages`: no noise, but no fact either. */
  readonly doubt: Float64Array;
  /** F of the same curve with its noise drawn anew, less `F`. */
  readonly noise: readonly Float64Array[];
  /** Mean, s, and variance over its square, what detector and injection add taken off; one standard error of each. */
  readonly mean: number;
  readonly meanError: number;
  readonly relative: number;
  readonly relativeError: number;
  /** Tracer seen over tracer given, with what noise makes of it and with the errors of flow and dose too; undefined where it is not known. */
  readonly recovery: Noisy | undefined;
}

/** A figure with two standard errors: by the noise of its curve alone, and with those of flow and dose. */
export interface Noisy {
  readonly value: number;
  readonly noise: number;
  readonly whole: number;
}

/**
 * Reads a curve and counts it in half times: the noise of a mean is mostly that of its tail, and a half time has less of it.
 * Noise goes all the way: through baseline, level, tail and half time.
 * @param seed of the draws
 * @returns or why it cannot be compared with others, in words
 */
export function standardCurve(
  trial: Trial,
  reading: Reading,
  options: MomentsOptions,
  seed: number,
): StandardCurve | string {
  const redraw = redrawing(trial, reading);
  const first = read(trial, reading, options);
  const found = first && momentsOf(first.response);
  if (!redraw || !first || !found) return "it cannot be read without a model";
  const { curve, response } = first;
  if (response.tail.is !== "closed" && response.tail.is !== "exponential")
    return "it has not come down at the end of its record";
  if (Math.abs(found.tail.area) > limit.tailMost) return `${Math.round(100 * found.tail.area)} % of it was not seen`;
  const own = counted(first);
  if (!own) return "half of it had left before it was read";
  const draw = random(seed);
  const draws = Array.from({ length: limit.draws }, () => read(trial, redraw(draw), options, curve.noise)).flatMap(
    (again) => (again && counted(again)) ?? [],
  );
  // The chance of what none of them does cannot be told from fewer.
  if (draws.length < 0.9 * limit.draws) return "its noise leaves no curve";
  const root = (of: (d: (typeof draws)[number]) => number): number =>
    Math.hypot(...draws.map(of)) / Math.sqrt(draws.length);
  const half = read(trial, everySecond(reading), options, curve.noise);
  const coarse = half && counted(half);
  const width = Math.sqrt(Math.max(0, curve.added.variance)) / own.half;
  const doubt = ages.map((age, i) => {
    // Beyond what noise makes of half the points, what they miss.
    const noise = root((d) => d.F[i] - own.F[i]);
    const sampling = coarse ? Math.max(0, Math.abs(coarse.F[i] - own.F[i]) - 2 * noise) : 1;
    const blurred = width > 0 ? Math.abs(own.F[i] - (own.at(age - width) + own.at(age + width)) / 2) : 0;
    return sampling + blurred;
  });
  const mean = found.mean - curve.added.mean;
  const errors = momentErrors(curve, response, found, "trapezoid");
  return {
    F: own.F,
    doubt: widest(doubt),
    noise: draws.map((d) => d.F.map((f, i) => f - own.F[i])),
    mean,
    meanError: errors.mean,
    relative: (found.variance - curve.added.variance) / mean ** 2,
    relativeError: errors.relative,
    recovery: recovered(trial, reading, options, first, found, errors.area),
  };
}

function recovered(
  trial: Trial,
  reading: Reading,
  options: MomentsOptions,
  { curve, recovered: own }: Read,
  found: RawMoments,
  areaError: number,
): Noisy | undefined {
  const flow = options.throughflow ?? onlyFlow(trial);
  const injection = trial.injections[0];
  const whole = recoveryOf(injection, reading, curve, found, flow, own, undefined, areaError, basisOf(trial, options));
  if (whole.value === undefined) return undefined;
  const noise = own ? (own.value === undefined ? 0 : (own.standardError ?? 0)) : (areaError / found.area) * whole.value;
  return { value: whole.value, noise, whole: whole.standardError ?? noise };
}

/** Mean time since the injection, s, and area of a curve, with what noise makes of them; undefined where it cannot be read without a model. */
export function meanAndArea(
  trial: Trial,
  reading: Reading,
): { readonly mean: Known; readonly area: Known } | undefined {
  const first = read(trial, reading, {});
  const found = first && momentsOf(first.response);
  if (!first || !found) return undefined;
  const errors = momentErrors(first.curve, first.response, found, "trapezoid");
  return {
    mean: { value: found.mean - first.curve.added.mean, sd: errors.mean },
    area: { value: found.area, sd: errors.area },
  };
}

interface Read {
  readonly curve: CleanCurve;
  readonly response: Response;
  /** What came through of a step. */
  readonly recovered: Figure | undefined;
}

function read(trial: Trial, reading: Reading, options: MomentsOptions, noise?: Noise): Read | undefined {
  const curve = cleanReading(trial, shortened(trial, reading, limit.points), noise);
  if (!curve || hopeless(curve)) return undefined;
  const { injections } = trial;
  const dilution = dilutionOf(injections[0].at, options);
  const flow = options.throughflow;
  const seen = seenResponse(injections[0], reading, curve, flow, "trapezoid", dilution, basisOf(trial, options));
  return "code" in seen ? undefined : { curve, response: seen.response, recovered: seen.recovered };
}

/** F over half times; undefined where there is no half time. */
function counted({ curve: { added }, response }: Read) {
  const F = distributionOf(response, { area: Number.NaN });
  const half = (F.quantile(0.5) ?? 0) - added.mean;
  if (!(half > 0)) return undefined;
  const at = (age: number): number => F.cumulative(age * half + added.mean);
  return { half, at, F: ages.map(at) };
}

/** Every second point of a reading from the injection on: what sampling half as often would have shown. */
function everySecond(reading: Reading): Reading {
  const { series, stages, doubts, censored } = reading;
  if (!series) return reading;
  const keep = <A extends Float64Array | Int8Array>(v: A): A => v.filter((_, i) => i % 2 === 0) as A;
  return {
    ...reading,
    series: { ...series, time: keep(series.time), value: keep(series.value) },
    stages: stages.map((s) => ({ ...s, value: keep(s.value) })),
    doubts: doubts.map(keep),
    censored: censored && keep(censored),
  };
}

/** The largest of each and its neighbours: a difference passes through zero where it is no less in doubt. */
const widest = (v: Float64Array): Float64Array => v.map((_, i) => Math.max(...v.subarray(Math.max(0, i - 2), i + 3)));
