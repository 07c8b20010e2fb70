import { extent } from "./extent.js";
import type { Smooth } from "./smooth.js";

/** How well samples show what happens between them. */
export interface Sampling {
  readonly smooth: Smooth;
  /** By interval: one standard error of the integral over it, unit of the curve times s, since a front may lie anywhere in it. */
  readonly unsure: Float64Array;
}

/** An interval so many times as wide as one beside it says nothing of slopes: a line is drawn. */
const wide = 3;
/** A front: so many standard deviations of a point, this share of the rise itself and of the whole curve. */
const front = { noise: 4, own: 0.5, whole: 0.05 } as const;

/**
 * Where a curve rises or falls between two samples by more than it does, the same way, in either interval beside: that much
 * may be a jump, which lies anywhere between the two: the integral is unsure by h J / 2 either way at most. A third of h J is
 * one standard error of it, more than the 1 / sqrt(12) of an even distribution, since delays and clocks are round numbers and
 * meet. Where the jump is most of the rise it is called a front and no parabola is drawn over it.
 * @param sd of a point
 */
export function samplingOf(t: Float64Array, y: Float64Array, sd: Float64Array): Sampling {
  const n = Math.max(0, t.length - 1);
  const smooth = new Uint8Array(n).fill(1);
  const unsure = new Float64Array(n);
  const [low, high] = extent(y);
  // Of an interval beside: its slope the same way as the rise, over h; 0 where there is none.
  const along = (k: number, rise: number, h: number): number => {
    const own = k >= 0 && k < n ? t[k + 1] - t[k] : 0;
    return own > 0 ? (Math.sign(rise) * (y[k + 1] - y[k]) * h) / own : 0;
  };
  const width = (k: number): number =>
    k >= 0 && k < n && t[k + 1] > t[k] ? t[k + 1] - t[k] : Number.POSITIVE_INFINITY;
  for (let i = 0; i < n; i++) {
    const h = t[i + 1] - t[i];
    const rise = y[i + 1] - y[i];
    if (!(h > 0) || h > wide * Math.min(width(i - 1), width(i + 1))) smooth[i] = 0;
    const expected = Math.max(0, along(i - 1, rise, h), along(i + 1, rise, h));
    const jump = Math.max(0, Math.abs(rise) - expected);
    const noise = Math.hypot(sd[i], sd[i + 1]);
    // What noisy points jump by themselves is in their own errors already.
    unsure[i] = (h * Math.sqrt(Math.max(0, jump ** 2 - 9 * noise ** 2))) / 3;
    if (jump > Math.max(front.noise * noise, front.own * Math.abs(rise), front.whole * (high - low))) smooth[i] = 0;
  }
  return { smooth, unsure };
}
