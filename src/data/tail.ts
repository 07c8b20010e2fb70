import { roughness } from "./noise.js";

/** How a curve ends, and what lies beyond its last point. Times in the curve's own unit. */
export type Tail =
  /** It has come down to nothing. */
  | { readonly is: "closed" }
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
    }
  /** A power law over more than a decade of time, or no steady decay: what lies beyond cannot be told. */
  | { readonly is: "power" | "open"; readonly level: number };

/**
 * The tail of a curve that ends near zero. Closed where the mean of the last points is so low that even at that level a
 * whole record more would add under 0.2 % to the area. Else an exponential, from a window that grows back from the last
 * points above noise as long as the slopes of its two halves agree and it stays under half the peak. Where none is seen,
 * the curve still counts as closed if its end is under 3 of its standard errors, or the record more would add under 2 %.
 */
export function tailOf(t: Float64Array, y: Float64Array, sd: Float64Array): Tail {
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
  if (more <= 2e-3 * area) return { is: "closed" };
  // The scatter of the end itself: a sharp front makes the roughness of the whole curve look like noise.
  const end = n - Math.max(12, Math.floor(n / 5));
  const scatter = end > peak ? Math.min(sd[n - 1], roughness(t.subarray(end), y.subarray(end))) : sd[n - 1];
  const tail = decayOf(t, y, peak, scatter, level);
  const lost = level <= (3 * scatter) / Math.sqrt(last);
  return tail.is === "open" && (lost || more <= 0.02 * area) ? { is: "closed" } : tail;
}

function decayOf(t: Float64Array, y: Float64Array, peak: number, scatter: number, level: number): Tail {
  const open: Tail = { is: "open", level };
  const stop = aboveNoise(y, peak, scatter);
  let first = stop - 1;
  while (first > peak && y[first - 1] > 0 && y[first - 1] < 0.5 * y[peak]) first--;
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

/** A straight line on log-log over a decade of time or more, much straighter than on log-linear. */
function isPowerLaw(t: Float64Array, y: Float64Array, first: number, stop: number): boolean {
  if (!(t[first] > 0) || t[stop - 1] < 10 * t[first] || stop - first < 10) return false;
  const straight = logLine(t.map(Math.log), y, first, stop);
  return straight.slope < 0 && straight.residual * 4 < logLine(t, y, first, stop).residual;
}

interface LogLine {
  readonly slope: number;
  readonly slopeError: number;
  readonly residual: number;
  /** Where slope and height are told independently, and the standard error of the height there. */
  readonly middle: number;
  readonly centreError: number;
  at(x: number): number;
}

/** Least squares of ln y on x over [from, to); points weighted by y^2, as even noise on y makes them. */
function logLine(x: Float64Array, y: Float64Array, from: number, to: number): LogLine {
  let [w0, wx, wy] = [0, 0, 0];
  for (let i = from; i < to; i++) {
    if (!(y[i] > 0)) continue;
    const w = y[i] * y[i];
    w0 += w;
    wx += w * x[i];
    wy += w * Math.log(y[i]);
  }
  const [mx, my] = [wx / w0, wy / w0];
  let [sxx, sxy, count] = [0, 0, 0];
  for (let i = from; i < to; i++) {
    if (!(y[i] > 0)) continue;
    const w = y[i] * y[i];
    sxx += w * (x[i] - mx) ** 2;
    sxy += w * (x[i] - mx) * (Math.log(y[i]) - my);
    count++;
  }
  const slope = sxy / sxx;
  let residual = 0;
  for (let i = from; i < to; i++) {
    if (y[i] > 0) residual += y[i] * y[i] * (Math.log(y[i]) - my - slope * (x[i] - mx)) ** 2;
  }
  const spread = count > 2 ? residual / (count - 2) : 0;
  return {
    slope,
    slopeError: Math.sqrt(spread / sxx),
    residual,
    middle: mx,
    centreError: Math.sqrt(spread / w0),
    at: (at) => my + slope * (at - mx),
  };
}

/**
 * Raw moments of level * exp(-rate (t - end)) over [end, infinity): integral of t^k, k = 0 to 3. Closed forms, by parts.
 */
export function tailMoments(tail: Tail): readonly [number, number, number, number] {
  if (tail.is !== "exponential") return [0, 0, 0, 0];
  const { level, rate: l, end: T } = tail;
  const m0 = level / l;
  return [
    m0,
    m0 * (T + 1 / l),
    m0 * (T * T + (2 * T) / l + 2 / l ** 2),
    m0 * (T ** 3 + (3 * T * T) / l + (6 * T) / l ** 2 + 6 / l ** 3),
  ];
}

/**
 * How far a figure of the tail's raw moments may be off, one standard error, from the two errors of its line.
 * @param of a figure as a function of the raw moments; linear enough over one standard error
 */
export function tailError(tail: Tail, of: (raw: readonly [number, number, number, number]) => number): number {
  if (tail.is !== "exponential") return 0;
  const here = of(tailMoments(tail));
  const higher = of(tailMoments({ ...tail, level: tail.level * Math.exp(tail.centreError) }));
  const slower = tail.level * Math.exp(tail.rateError * (tail.end - tail.middle));
  const flatter = of(tailMoments({ ...tail, level: slower, rate: tail.rate - tail.rateError }));
  return Math.hypot(higher - here, flatter - here);
}
