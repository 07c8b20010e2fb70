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
      /** Relative standard errors of level and rate. */
      readonly levelError: number;
      readonly rateError: number;
    }
  /** A power law over more than a decade of time, or no steady decay: what lies beyond cannot be told. */
  | { readonly is: "power" | "open"; readonly level: number };

/**
 * The tail of a curve that ends near zero. Closed where the mean of the last points is under 3 of its standard errors, or
 * so low that even at that level a whole record more would add under 0.2 % to the area (2 % where no exponential
 * can be seen). Else the window of the exponential is grown back from the last point as long as the slopes of its two
 * halves agree and it stays under half the peak.
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
  // The scatter of the end itself: a sharp front makes the roughness of the whole curve look like noise.
  const end = n - Math.max(8, Math.floor(n / 10));
  const scatter = end > peak ? Math.min(sd[n - 1], roughness(t.subarray(end), y.subarray(end))) : sd[n - 1];
  if (level <= (3 * scatter) / Math.sqrt(last) || more <= 2e-3 * area) return { is: "closed" };
  const tail = decayOf(t, y, peak, level);
  return tail.is === "open" && more <= 0.02 * area ? { is: "closed" } : tail;
}

function decayOf(t: Float64Array, y: Float64Array, peak: number, level: number): Tail {
  const n = t.length;
  let first = n - 1;
  while (first > peak && y[first - 1] > 0 && y[first - 1] < 0.5 * y[peak]) first--;
  if (n - first < 4) return { is: "open", level };
  if (isPowerLaw(t, y, first)) return { is: "power", level };
  const from = window(t, y, first);
  if (from === undefined) return { is: "open", level };
  const fit = logLine(t, y, from, n);
  if (!(fit.slope < 0)) return { is: "open", level };
  const end = t[n - 1];
  return {
    is: "exponential",
    end,
    level: Math.exp(fit.at(end)),
    rate: -fit.slope,
    from: t[from],
    points: n - from,
    levelError: fit.errorAt(end),
    rateError: fit.slopeError / -fit.slope,
  };
}

/** Index at which the longest window with one slope begins; undefined where even the last points have none. */
function window(t: Float64Array, y: Float64Array, first: number): number | undefined {
  const n = t.length;
  let best: number | undefined;
  const least = Math.max(4, Math.ceil((n - first) / 4));
  for (let from = n - least; from >= first; from -= Math.max(1, Math.floor((n - from) / 8))) {
    const middle = Math.floor((from + n) / 2);
    const [early, late, whole] = [logLine(t, y, from, middle + 1), logLine(t, y, middle, n), logLine(t, y, from, n)];
    const allowed = Math.max(2 * Math.hypot(early.slopeError, late.slopeError), 0.1 * Math.abs(whole.slope));
    if (!(whole.slope < 0) || Math.abs(early.slope - late.slope) > allowed) break;
    best = from;
  }
  return best;
}

/** A straight line on log-log over a decade of time or more, much straighter than on log-linear. */
function isPowerLaw(t: Float64Array, y: Float64Array, first: number): boolean {
  const n = t.length;
  if (!(t[first] > 0) || t[n - 1] < 10 * t[first] || n - first < 10) return false;
  const straight = logLine(t.map(Math.log), y, first, n);
  return straight.slope < 0 && straight.residual * 4 < logLine(t, y, first, n).residual;
}

interface LogLine {
  readonly slope: number;
  readonly slopeError: number;
  readonly residual: number;
  at(x: number): number;
  errorAt(x: number): number;
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
    at: (at) => my + slope * (at - mx),
    errorAt: (at) => Math.sqrt(spread / w0 + (spread * (at - mx) ** 2) / sxx),
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
