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
    const gradient = gradientOf(name, found);
    const doubt = found.doubt[name];
    const points = Math.hypot(
      pointsError(gradient, response, curve),
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
function gradientOf(name: keyof typeof figures, { gradient, mean, variance, third }: RawMoments): Float64Array {
  if (name === "skewness")
    return gradient.third.map((g, i) => g / variance ** 1.5 - (1.5 * third * gradient.variance[i]) / variance ** 2.5);
  if (name === "relative")
    return gradient.variance.map((g, i) => g / mean ** 2 - (2 * variance * gradient.mean[i]) / mean ** 3);
  return gradient[name];
}

/** Scatter of the points, as far as neighbours hang together, and what was not seen before the first of them. */
function pointsError(gradient: Float64Array, { sd, weight, front, time }: Response, { noise }: CleanCurve): number {
  const early = front ? front * (gradient[0] / weight[0]) : 0;
  return Math.sqrt(early ** 2 + varianceOfSum(gradient, sd, time, noise.persistence));
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
