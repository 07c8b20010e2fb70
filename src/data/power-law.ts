import { decayOver } from "./decay.js";

/** So many points of a window are looked at: enough to tell, not to wait for. */
const most = 300;

/**
 * Does y fall like a power of t, to the end of [first, stop)? Two exponentials look like one over a decade of time and
 * more (their slope on log-log is level where one takes over from the other), so that all of this is demanded:
 * a decade of time; over the last factor of four in it a power far more likely than an exponential, with a log-log slope
 * that does not steepen; and over the whole decade a power far more likely than the best two exponentials.
 * @param t time since the injection, y above 0 near enough
 */
export function isPowerLaw(t: Float64Array, y: Float64Array, first: number, stop: number): boolean {
  if (!(t[first] > 0) || t[stop - 1] < 10 * t[first] || stop - first < 10) return false;
  const late = indexFrom(t, t[stop - 1] / 4, first);
  const half = indexFrom(t, t[stop - 1] / 2, first);
  if (half - late < 4 || stop - half < 4) return false;
  const over = (from: number, to: number) => {
    const [time, value] = [t.subarray(from, to), y.subarray(from, to)];
    return { power: decayOver(time.map(Math.log), value), exponential: () => decayOver(time, value) };
  };
  const { power, exponential } = over(late, stop);
  if (!farBetter(power.residual, exponential().residual, stop - late)) return false;
  // An exponential doubles its slope on log-log from one half of the window to the other.
  const [early, last] = [over(late, half).power, over(half, stop).power];
  const steepening = last.rate / early.rate;
  const doubt = steepening * Math.hypot(last.rateError / last.rate, early.rateError / early.rate);
  if (!(steepening + doubt < 1.6)) return false;
  const { time, value } = thinned(t, y, first, stop);
  return farBetter(decayOver(time.map(Math.log), value).residual, twoExponentials(time, value), time.length);
}

/** By a likelihood ratio of e^8 at least, with residuals of which half the spread is not noise of both. */
const farBetter = (residual: number, other: number, n: number): boolean =>
  other > 1.2 * residual && n * Math.log(other / residual) > 16;

function indexFrom(t: Float64Array, from: number, first: number): number {
  let i = first;
  while (t[i] < from) i++;
  return i;
}

function thinned(t: Float64Array, y: Float64Array, first: number, stop: number) {
  const stride = Math.max(1, Math.ceil((stop - first) / most));
  const kept: number[] = [];
  for (let i = first; i < stop; i += stride) kept.push(i);
  return { time: Float64Array.from(kept, (i) => t[i]), value: Float64Array.from(kept, (i) => y[i]) };
}

/** Least sum of squares of y - (A e^(-a t) + B e^(-b t)): rates from a grid, then by halving steps; A and B are linear. */
function twoExponentials(t: Float64Array, y: Float64Array): number {
  const n = t.length;
  const [slowest, fastest] = [0.05 / (t[n - 1] - t[0]), 10 / t[0]];
  const steps = 24;
  let ratio = (fastest / slowest) ** (1 / steps);
  let best = { sum: Number.POSITIVE_INFINITY, a: fastest, b: slowest };
  const look = (a: number, b: number): void => {
    const sum = residualOf(t, y, a, b);
    if (sum < best.sum) best = { sum, a, b };
  };
  for (let i = 0; i <= steps; i++) for (let j = 0; j < i; j++) look(slowest * ratio ** i, slowest * ratio ** j);
  for (let k = 0; k < 60 && ratio > 1.0005; k++) {
    const { sum, a, b } = best;
    for (const f of [ratio, 1, 1 / ratio]) for (const g of [ratio, 1, 1 / ratio]) look(a * f, b * g);
    if (best.sum > 0.999 * sum) ratio = Math.sqrt(ratio);
  }
  return best.sum;
}

function residualOf(t: Float64Array, y: Float64Array, a: number, b: number): number {
  let [aa, ab, bb, ay, by, yy] = [0, 0, 0, 0, 0, 0];
  for (let i = 0; i < t.length; i++) {
    const u = Math.exp(-a * (t[i] - t[0]));
    const v = Math.exp(-b * (t[i] - t[0]));
    aa += u * u;
    ab += u * v;
    bb += v * v;
    ay += u * y[i];
    by += v * y[i];
    yy += y[i] * y[i];
  }
  const det = aa * bb - ab * ab;
  if (!(det > 1e-12 * aa * bb)) return Number.POSITIVE_INFINITY;
  const [A, B] = [(bb * ay - ab * by) / det, (aa * by - ab * ay) / det];
  // A decay of two zones has no negative part beyond its peak.
  if (A < 0 || B < 0) return Number.POSITIVE_INFINITY;
  return Math.max(0, yy - A * ay - B * by);
}
