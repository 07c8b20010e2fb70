import type { CleanCurve } from "./clean.js";
import { varianceOfSum } from "./persistence.js";
import { figures, momentsOf, pulseResponse, type RawMoments, type Response, type TailDoubt } from "./response.js";
import type { Rule } from "./weights.js";

/**
 * One standard error of each figure (SI): scatter of the points; baseline; tail; and what the baseline may have taken
 * away of a tail. Baseline and tail that were fitted together move together; under a tail fitted afterwards the baseline
 * is moved and the tail fitted anew.
 */
export function momentErrors(
  curve: CleanCurve,
  response: Response,
  found: RawMoments,
  rule: Rule,
): Readonly<Record<keyof typeof figures, number>> {
  const moved = movedBaselines(curve, response, rule);
  const error = (name: keyof typeof figures): number => {
    const gradient = gradientOf(name, response, found);
    const doubt = found.doubt[name];
    const points = Math.hypot(
      ownError(name, response, found, curve),
      doubtsError(gradient, response, curve, name === "area" ? 1 / (1 - found.tail.area) : 1),
    );
    if (curve.baseline?.tail) return Math.hypot(points, jointError(gradient, doubt, response, curve), doubt.hidden);
    const figure = figures[name];
    const under = moved
      ? Math.hypot(...moved.map((m) => figure(m) - figure(found)))
      : baselineError(gradient, response, curve);
    return Math.hypot(points, under, doubt.error, doubt.hidden);
  };
  return {
    area: error("area"),
    mean: error("mean"),
    variance: error("variance"),
    skewness: error("skewness"),
    relative: error("relative"),
  };
}

/** Change of a figure by each point. */
function gradientOf(name: keyof typeof figures, { time, weight }: Response, found: RawMoments): Float64Array {
  const impact = impactOf(name, found);
  return time.map((t, i) => weight[i] * impact(t));
}

/** One standard error of a figure by the scatter of the points and what lies between them, all else being known. */
export function ownError(name: keyof typeof figures, response: Response, found: RawMoments, curve: CleanCurve): number {
  return Math.hypot(
    pointsError(gradientOf(name, response, found), response, curve),
    samplingError(impactOf(name, found), response),
  );
}

/** Change of a figure for one more unit of integral at a time. */
function impactOf(name: keyof typeof figures, { impact, mean, variance, third }: RawMoments): (time: number) => number {
  if (name === "skewness")
    return (t) => impact.third(t) / variance ** 1.5 - (1.5 * third * impact.variance(t)) / variance ** 2.5;
  if (name === "relative") return (t) => impact.variance(t) / mean ** 2 - (2 * variance * impact.mean(t)) / mean ** 3;
  return impact[name];
}

/** Scatter of the points, as far as neighbours hang together; that of a step's last ones is in its final level, too. */
function pointsError(gradient: Float64Array, { sd, time, ends, value }: Response, { noise }: CleanCurve): number {
  if (!ends) return Math.sqrt(varianceOfSum(gradient, sd, time, noise.persistence));
  const [n, pull] = [gradient.length, gradient.reduce((sum, g, i) => sum + g * (1 - value[i]), 0)];
  const whole = gradient.map((g, i) => (i >= n - ends.points ? g - pull / ends.points : g));
  const first = gradient.reduce((sum, g, i) => sum + g * value[i], 0) * ends.first;
  const last = ends.points > 0 ? 0 : pull * ends.last;
  return Math.hypot(first, last, Math.sqrt(varianceOfSum(whole, sd, time, noise.persistence)));
}

/** What the samples leave open between them. */
function samplingError(impact: (time: number) => number, { time, sampling }: Response): number {
  let sum = 0;
  for (const [i, s] of sampling.unsure.entries()) sum += (s * impact((time[i] + time[i + 1]) / 2)) ** 2;
  return Math.sqrt(sum);
}

/** What calibration and limits leave open; a step is read against its own levels, where a slope cancels. */
function doubtsError(gradient: Float64Array, { is, value }: Response, curve: CleanCurve, scale: number): number {
  if (is === "washout") return 0;
  const seen = curve.value.length - curve.before;
  const lead = value.length - seen;
  const shifts = curve.doubts.map((d) => {
    let sum = 0;
    for (let i = 0; i < seen; i++) sum += gradient[i + lead] * d[i + curve.before];
    return scale * sum;
  });
  return Math.hypot(0, ...shifts);
}

/** How a figure falls as the baseline rises, and as it turns about its middle. */
function byBaseline(gradient: Float64Array, time: Float64Array, middle: number): [number, number] {
  let [level, slope] = [0, 0];
  for (let i = 0; i < gradient.length; i++) {
    level -= gradient[i];
    slope -= gradient[i] * (time[i] - middle);
  }
  return [level, slope];
}

function baselineError(gradient: Float64Array, { time, is }: Response, { baseline }: CleanCurve): number {
  if (!baseline || is === "washout") return 0;
  const [level, slope] = byBaseline(gradient, time, baseline.middle);
  return Math.hypot(level * baseline.levelError, slope * baseline.slopeError);
}

function jointError(gradient: Float64Array, doubt: TailDoubt, { time }: Response, { baseline }: CleanCurve): number {
  if (!baseline?.tail) return 0;
  const by = [...byBaseline(gradient, time, baseline.middle), ...doubt.gradient];
  const { covariance } = baseline.tail;
  let sum = 0;
  for (let i = 0; i < 4; i++) for (let j = 0; j < 4; j++) sum += by[i] * covariance[4 * i + j] * by[j];
  return Math.sqrt(Math.max(0, sum));
}

/** Moments with the baseline a standard error higher, and turned by one; undefined where the tail does not rest on it. */
function movedBaselines(curve: CleanCurve, response: Response, rule: Rule): RawMoments[] | undefined {
  const { baseline, value, time } = curve;
  if (!baseline || baseline.tail || response.is === "washout" || response.tail.is !== "exponential") return undefined;
  const shifts = [() => baseline.levelError, (t: number) => baseline.slopeError * (t - baseline.middle)];
  const moved = shifts.map((by) => {
    const other = pulseResponse({ ...curve, value: value.map((y, i) => y - by(time[i])) }, rule);
    return other.tail.is === "exponential" || other.tail.is === "closed" ? momentsOf(other) : undefined;
  });
  return moved.every((m) => m !== undefined) ? moved : undefined;
}
