import { thresholds as limit } from "./thresholds.js";

/** A peak that stands out of noise and of what lies beside it. */
export interface Peak {
  readonly time: number;
  readonly height: number;
  /** Area from the dip before it to the dip after it, of the curve. */
  readonly area: number;
}

/**
 * Peaks of a curve, in order of time; a running mean of five keeps single points of noise from being one.
 * @param lag1 correlation of neighbouring errors: a mean of those that hang together is hardly better than one
 */
export function peaksOf(time: Float64Array, value: Float64Array, sd: Float64Array, lag1 = 0): Peak[] {
  const n = value.length;
  const wide = n >= 60 ? 2 : n >= 25 ? 1 : 0;
  const smooth = value.map((_, i) => {
    const [a, b] = [Math.max(0, i - wide), Math.min(n - 1, i + wide)];
    let sum = 0;
    for (let k = a; k <= b; k++) sum += value[k];
    return sum / (b - a + 1);
  });
  const most = smooth.reduce((m, v) => Math.max(m, v), 0);
  const among = 2 * wide + 1;
  let together = among;
  for (let gap = 1; gap < among; gap++) together += 2 * (among - gap) * lag1 ** gap;
  const noise = sd.map((s) => (s * Math.sqrt(together)) / among);
  const tops: number[] = [];
  const dips: number[] = [0];
  let [up, at] = [true, 0];
  const step = (i: number): number => Math.max(limit.peakNoise * noise[i], limit.peakLeast * most);
  for (let i = 1; i < n; i++) {
    if (up) {
      if (smooth[i] > smooth[at]) at = i;
      else if (smooth[at] - smooth[i] > step(at)) {
        tops.push(at);
        [up, at] = [false, i];
      }
    } else if (smooth[i] < smooth[at]) at = i;
    else if (smooth[i] - smooth[at] > step(i)) {
      dips.push(at);
      [up, at] = [true, i];
    }
  }
  if (up && tops.length === 0) tops.push(at);
  dips.push(n - 1);
  return tops.map((k, p) => {
    let area = 0;
    for (let i = dips[p] + 1; i <= dips[p + 1]; i++) area += ((value[i] + value[i - 1]) / 2) * (time[i] - time[i - 1]);
    return { time: time[k], height: smooth[k], area };
  });
}
