import type { Distribution } from "./distribution.js";
import { type Peak, peaksOf } from "./peaks.js";
import type { Sight } from "./sight.js";
import { thresholds as limit } from "./thresholds.js";

/** A straight line through ln W. */
export interface WashoutLine {
  /** 1/s. */
  readonly rate: number;
  /** W that it gives at the injection, with one standard error. */
  readonly intercept: number;
  readonly interceptError: number;
  /** Scatter of ln W about it. */
  readonly scatter: number;
  readonly points: number;
}

/** What the rules look at. Times in s since the injection. */
export interface Shape {
  readonly at: string;
  readonly time: Float64Array;
  readonly W: Float64Array;
  /** One standard error of W at each point. */
  readonly error: Float64Array;
  readonly mean: number;
  /** Variance over squared mean. */
  readonly relative: number;
  /** Half the time from 16 to 84 % over the middle time, with one standard error. */
  readonly width: number | undefined;
  readonly widthError: number;
  /** Main part of ln W, and the late part where there is one. */
  readonly main: WashoutLine | undefined;
  readonly late: WashoutLine | undefined;
  /** Time of the highest E, and of the first 0.5 %. */
  readonly mode: number;
  readonly first: number;
  readonly peaks: readonly Peak[];
  /** Escape intensity over stretches of W, with errors, 1/s. */
  readonly intensity: readonly { readonly time: number; readonly value: number; readonly error: number }[];
}

/** @returns undefined where the curve has too few points for shapes */
export function shapeOf({ curve, response, F, found, mean: own, variance, error }: Sight): Shape | undefined {
  const { time } = F;
  const [mean, relative] = [found.mean, variance / own ** 2];
  if (time.length < 12 || !(mean > 0)) return undefined;
  const W = F.F.map((f) => 1 - f);
  const seen = (i: number): boolean => W[i] > limit.washoutLeast * error[i] && W[i] > 0;
  const main = lineOver(time, W, error, (i) => seen(i) && W[i] <= limit.lineFrom && W[i] >= limit.lineTo);
  const lateFrom = limit.slowFrom;
  const late = lineOver(time, W, error, (i) => seen(i) && W[i] <= lateFrom && W[i] >= lateFrom / 30);
  const highest = F.E.reduce((best, e, i) => (e > F.E[best] ? i : best), 0);
  return {
    at: curve.at,
    time,
    W,
    error,
    mean,
    relative,
    ...widthOf(F, error),
    main,
    late: late && spanOf(time, W, error, lateFrom) >= limit.slowSpan ? late : undefined,
    mode: time[highest],
    first: F.quantile(0.005) ?? time[0],
    peaks: response.is === "density" ? peaksOf(time, response.value, response.sd, curve.noise.persistence.lag1) : [],
    intensity: intensityOf(time, W, error),
  };
}

function widthOf(F: Distribution, error: Float64Array): Pick<Shape, "width" | "widthError"> {
  const [a, b, c] = [0.16, 0.5, 0.84].map((p) => F.quantile(p));
  if (a === undefined || !b || c === undefined) return { width: undefined, widthError: 0 };
  const late = (t: number): number => {
    const i = Math.max(
      1,
      F.time.findIndex((s) => s >= t),
    );
    const density = (F.E[i] + F.E[i - 1]) / 2;
    return density > 0 ? error[i] / density : Number.POSITIVE_INFINITY;
  };
  return { width: (c - a) / 2 / b, widthError: Math.hypot(late(a), late(c)) / 2 / b };
}

/** Weighted least squares of ln W on t over the points chosen. Neighbouring points of W share most of their error. */
function lineOver(
  t: Float64Array,
  W: Float64Array,
  error: Float64Array,
  chosen: (i: number) => boolean,
): WashoutLine | undefined {
  const use = [...t.keys()].filter(chosen);
  if (use.length < 4) return undefined;
  const mean = (f: (i: number) => number): number => use.reduce((sum, i) => sum + f(i), 0) / use.length;
  const [mt, my] = [mean((i) => t[i]), mean((i) => Math.log(W[i]))];
  const wide = use.reduce((sum, i) => sum + (t[i] - mt) ** 2, 0);
  if (!(wide > 0)) return undefined;
  const slope = use.reduce((sum, i) => sum + (t[i] - mt) * (Math.log(W[i]) - my), 0) / wide;
  const rest = use.map((i) => Math.log(W[i]) - my - slope * (t[i] - mt));
  const scatter = Math.sqrt(rest.reduce((sum, r) => sum + r * r, 0) / (use.length - 2));
  const own = Math.sqrt(mean((i) => (error[i] / W[i]) ** 2));
  const lever = Math.sqrt(1 / 4 + mt ** 2 / wide / (use.length / 4));
  const intercept = Math.exp(my - slope * mt);
  return {
    rate: -slope,
    intercept,
    interceptError: intercept * Math.hypot(scatter, own) * Math.min(lever, 3),
    scatter,
    points: use.length,
  };
}

/** Over which factor W is seen below a level. */
function spanOf(t: Float64Array, W: Float64Array, error: Float64Array, from: number): number {
  let least = from;
  for (let i = 0; i < t.length; i++) if (W[i] > limit.washoutLeast * error[i] && W[i] > 0 && W[i] < least) least = W[i];
  return from / least;
}

/** Fall of ln W over stretches in which W falls by a fifth or more: the escape intensity (Naor & Shinnar 1963). */
function intensityOf(t: Float64Array, W: Float64Array, error: Float64Array): Shape["intensity"] {
  const found: { time: number; value: number; error: number }[] = [];
  let from = 0;
  for (let i = 1; i < t.length; i++) {
    if (!(W[i] > limit.washoutLeast * error[i]) || W[i] < 0.02) break;
    if (!(W[i] <= 0.8 * W[from]) || i - from < 2) continue;
    const span = t[i] - t[from];
    const value = Math.log(W[from] / W[i]) / span;
    found.push({
      time: (t[i] + t[from]) / 2,
      value,
      error: Math.hypot(error[from] / W[from], error[i] / W[i]) / span,
    });
    from = i;
  }
  return found;
}
