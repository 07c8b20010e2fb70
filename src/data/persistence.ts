import type { Along } from "./along.js";

/** How neighbouring errors of a log hang together. */
export interface Persistence {
  /** Correlation of neighbours; 0 where none is told. */
  readonly lag1: number;
  /** Their spacing, s. */
  readonly spacing: number;
  /** Where it was looked for; `nowhere`: no stretch was long enough, so that independence is a guess. */
  readonly judged: "silence" | "curve" | "nowhere";
  /** Points that it was taken from, and their standard deviation; undefined where errors are not told to hang together. */
  readonly from?: { readonly points: number; readonly sd: number };
}

const independent = (judged: Persistence["judged"]): Persistence => ({ lag1: 0, spacing: 1, judged });

/** A stretch needs so many points. */
const fewest = 30;

/**
 * Lag-1 correlation of the errors from a stretch where nothing but them is there: before the injection, a straight line
 * taken off. Only a positive one beyond two standard errors counts; the bias of -(2 + 4 r) / n that a
 * line taken off leaves is put back
 * (after M. G. Kendall, Biometrika 41 (1954) 403-404, from memory).
 * @param count how many points lie before the injection
 */
export function persistenceOf(t: Float64Array, y: Float64Array, count: number): Persistence {
  if (count < fewest) return independent("nowhere");
  const residual = straightened(t.subarray(0, count), y.subarray(0, count));
  const square = residual.reduce((sum, e) => sum + e * e, 0);
  if (!(square > 0)) return independent("silence");
  let product = 0;
  for (let i = 1; i < count; i++) product += residual[i] * residual[i - 1];
  const raw = product / square;
  if (!(raw * Math.sqrt(count) > 2)) return independent("silence");
  const lag1 = Math.min(0.995, raw + (2 + 4 * raw) / count);
  return {
    lag1,
    judged: "silence",
    spacing: (t[count - 1] - t[0]) / (count - 1),
    from: { points: count, sd: Math.sqrt(square / (count - 2) / Math.max(0.2, 1 - (2 * inflation(lag1)) / count)) },
  };
}

/** The same from errors about a smooth curve. */
export function persistenceAlong(t: Float64Array, { points, sd, time }: Along): Persistence {
  if (!(time > 0)) return independent("curve");
  const n = t.length;
  const spacing = (t[n - 1] - t[n - points]) / (points - 1);
  return { lag1: Math.min(0.995, Math.exp(-spacing / time)), judged: "curve", spacing, from: { points, sd } };
}

/** What the variance of a mean grows by where neighbours hang together: (1 + r) / (1 - r). */
export const inflation = (lag1: number): number => (1 + lag1) / (1 - lag1);

/**
 * Variance of sum g_i e_i for errors of standard deviation sd_i whose correlation falls by lag1 every `spacing`
 * (a first-order autoregression), in one pass.
 */
export function varianceOfSum(
  g: ArrayLike<number>,
  sd: ArrayLike<number>,
  time: ArrayLike<number>,
  { lag1, spacing }: Pick<Persistence, "lag1" | "spacing">,
): number {
  let sum = 0;
  let before = 0;
  for (let i = 0; i < g.length; i++) {
    const own = g[i] * sd[i];
    if (lag1 > 0 && i > 0) before *= lag1 ** ((time[i] - time[i - 1]) / spacing);
    sum += own * (own + 2 * (lag1 > 0 ? before : 0));
    before += own;
  }
  return Math.max(0, sum);
}

function straightened(t: Float64Array, y: Float64Array): Float64Array {
  const n = t.length;
  const mean = (v: Float64Array): number => v.reduce((sum, x) => sum + x, 0) / n;
  const [mt, my] = [mean(t), mean(y)];
  const wide = t.reduce((sum, x) => sum + (x - mt) ** 2, 0);
  const slope = wide > 0 ? t.reduce((sum, x, i) => sum + (x - mt) * (y[i] - my), 0) / wide : 0;
  return y.map((v, i) => v - my - slope * (t[i] - mt));
}
