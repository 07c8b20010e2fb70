import { decayMoments, decayOver, type RawFour } from "./decay.js";
import { logLine } from "./log-line.js";
import { roughness } from "./noise.js";
import { isPowerLaw } from "./power-law.js";
import type { SlowTail } from "./slow-tail.js";

/** How a curve ends, and what lies beyond its last point. Times in the curve's own unit. */
export type Tail =
  /** It has come down to nothing; what is not told from nothing may decay for `horizon` yet, from `level` on. */
  | { readonly is: "closed"; readonly level: number; readonly horizon: number }
  /** level * exp(-rate (t - end)) from `end` on, fitted to `points` points since `from`. */
  | {
      readonly is: "exponential";
      readonly end: number;
      readonly level: number;
      readonly rate: number;
      readonly from: number;
      readonly points: number;
      /** Standard errors of the line ln c = centre - rate (t - middle): independent of each other. */
      readonly centreError: number;
      readonly rateError: number;
      readonly middle: number;
      /** Where it was fitted together with the baseline: the covariance of both, in place of the three above. */
      readonly joint?: SlowTail;
    }
  /** A power law over more than a decade of time, or no steady decay: what lies beyond cannot be told. */
  | { readonly is: "power" | "open"; readonly level: number };

/**
 * The tail of a curve that ends near zero. Closed where the mean of the last points is so low that even at that level a
 * whole record more would add under 0.2 % to the area. Else an exponential, from a window that grows back from the last
 * points above noise as long as the slopes of its two halves agree and it stays under half the peak. Where none is seen,
 * the curve still counts as closed if its end is under 3 of its standard errors, or the record more would add under 2 %.
 * @param grow what the variance of a mean grows by where errors hang together
 */
export function tailOf(t: Float64Array, y: Float64Array, sd: Float64Array, grow = 1): Tail {
  const n = t.length;
  let peak = 0;
  let area = 0;
  for (let i = 0; i < n; i++) {
    if (y[i] > y[peak]) peak = i;
    if (i > 0) area += ((y[i] + y[i - 1]) / 2) * (t[i] - t[i - 1]);
  }
  const last = Math.min(n - 1 - peak, Math.max(1, Math.floor(n / 50)));
  if (last < 1) return { is: "open", level: y[n - 1] };
  let level = 0;
  for (let i = n - last; i < n; i++) level += y[i] / last;
  const more = level * (t[n - 1] - Math.min(0, t[0]));
  // The scatter of the end itself: a sharp front makes the roughness of the whole curve look like noise.
  const end = n - Math.max(12, Math.floor(n / 5));
  const scatter =
    end > peak && grow === 1 ? Math.min(sd[n - 1], roughness(t.subarray(end), y.subarray(end))) : sd[n - 1];
  if (more <= 2e-3 * area) return closedTail(t, y, peak, scatter);
  const tail = decayOf(t, y, peak, scatter, level);
  const lost = level <= 3 * scatter * Math.sqrt(Math.min(1, grow / last));
  return tail.is === "open" && (lost || more <= 0.02 * area) ? closedTail(t, y, peak, scatter) : tail;
}

/**
 * What may still come after the end: the level of the last points after the curve was lost in noise, or its standard error,
 * for as long as the decay took that was last seen above it.
 */
function closedTail(t: Float64Array, y: Float64Array, peak: number, scatter: number): Tail {
  const n = t.length;
  const stop = aboveNoise(y, peak, scatter);
  // The later half of what lies in the noise: the decay still shows in the mean of the earlier one.
  const from = Math.min((stop + n) >> 1, n - Math.max(1, Math.floor(n / 50)));
  let [mean, square] = [0, 0];
  for (let i = from; i < n; i++) {
    mean += y[i] / (n - from);
    square += y[i] * y[i];
  }
  const whole = t[n - 1] - Math.min(0, t[0]);
  const half = (t[peak] + t[stop - 1]) / 2;
  let [first, late] = [peak, peak];
  while (first < stop && y[first] > 0.5 * y[peak]) first++;
  while (late < stop && t[late] < half) late++;
  if (stop - late >= 10) first = Math.max(first, late);
  const rate = stop - first < 4 ? 0 : decayOver(t.subarray(first, stop), y.subarray(first, stop)).rate;
  return {
    is: "closed",
    level: Math.max(mean, Math.sqrt(square) / (n - from)),
    horizon: 1 / Math.max(rate, 1 / whole),
  };
}

function decayOf(t: Float64Array, y: Float64Array, peak: number, scatter: number, level: number): Tail {
  const open: Tail = { is: "open", level };
  const stop = aboveNoise(y, peak, scatter);
  let first = stop - 1;
  while (first > peak && y[first - 1] < 0.5 * y[peak]) first--;
  if (stop - first < 4) return open;
  if (isPowerLaw(t, y, first, stop)) return { is: "power", level };
  const seen = window(t, y, first, stop);
  if (seen === undefined) return open;
  const { from, bend } = seen;
  const fit = logLine(t, y, from, stop);
  const rateError = Math.hypot(fit.slopeError, bend / 2);
  const end = t[t.length - 1];
  const rate = -fit.slope;
  // An end seen to a factor of two only says nothing of what lies beyond it.
  const doubt = Math.hypot(fit.centreError, rateError * (end - fit.middle));
  if (!(rate > 0) || doubt > 0.7 || rateError > 0.5 * rate) return open;
  return {
    is: "exponential",
    end,
    level: Math.exp(fit.at(end)),
    rate,
    from: t[from],
    points: stop - from,
    centreError: fit.centreError,
    rateError,
    middle: fit.middle,
  };
}

/** One past the last point that stands out of the noise together with the two before it. */
function aboveNoise(y: Float64Array, peak: number, scatter: number): number {
  let stop = y.length;
  while (stop - 3 > peak && (y[stop - 1] + y[stop - 2] + y[stop - 3]) / 3 <= 3 * scatter) stop--;
  return stop;
}

/**
 * Index at which the longest window with one slope begins, and by how much the slopes of its halves differ beyond their
 * errors (a decay that is still settling); undefined where even the last points have none.
 */
function window(
  t: Float64Array,
  y: Float64Array,
  first: number,
  stop: number,
): { from: number; bend: number } | undefined {
  let best: { from: number; bend: number } | undefined;
  const least = Math.max(4, Math.ceil((stop - first) / 4));
  for (let from = stop - least; from >= first; from -= Math.max(1, Math.floor((stop - from) / 8))) {
    const middle = Math.floor((from + stop) / 2);
    const early = logLine(t, y, from, middle + 1);
    const late = logLine(t, y, middle, stop);
    const whole = logLine(t, y, from, stop);
    const differ = early.slope - late.slope;
    const noise = Math.hypot(early.slopeError, late.slopeError);
    if (!(whole.slope < 0) || Math.abs(differ) > Math.max(3 * noise, 0.1 * Math.abs(whole.slope))) break;
    best = { from, bend: Math.sqrt(Math.max(0, differ * differ - noise * noise)) };
  }
  return best;
}

/** What the extrapolated tail adds. */
export const tailMoments = (tail: Tail): RawFour =>
  tail.is === "exponential" ? decayMoments(tail.level, tail.rate, tail.end) : [0, 0, 0, 0];

/** How a figure of the tail's raw moments changes with level and rate of a tail fitted with the baseline. */
export function tailGradient(tail: Tail, of: (raw: RawFour) => number): readonly [level: number, rate: number] {
  if (tail.is !== "exponential" || !tail.joint) return [0, 0];
  const { level, rate, end } = tail;
  const at = (l: number, r: number): number => of(decayMoments(l, r, end));
  const step = 1e-4 * level;
  // A slower rate moves moments more than a faster one: the change is taken over one standard error that way.
  const slower = Math.min(0.6 * rate, Math.sqrt(tail.joint.covariance[15]) + 1e-4 * rate);
  return [
    (at(level + step, rate) - at(level - step, rate)) / (2 * step),
    (at(level, rate) - at(level, rate - slower)) / slower,
  ];
}

/**
 * How far a figure of the tail's raw moments may be off, one standard error, from the two errors of its line, or by what
 * may come after a curve that counts as closed.
 * @param end the last time
 * @param of  a figure as a function of the raw moments; linear enough over one standard error
 */
export function tailError(tail: Tail, end: number, of: (raw: RawFour) => number): number {
  const here = of(tailMoments(tail));
  if (tail.is === "closed") return Math.abs(of(decayMoments(tail.level, 1 / tail.horizon, end)) - here);
  if (tail.is !== "exponential" || tail.joint) return 0;
  const higher = of(tailMoments({ ...tail, level: tail.level * Math.exp(tail.centreError) }));
  const slower = tail.level * Math.exp(tail.rateError * (tail.end - tail.middle));
  const flatter = of(tailMoments({ ...tail, level: slower, rate: tail.rate - tail.rateError }));
  return Math.hypot(higher - here, flatter - here);
}
