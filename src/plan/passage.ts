/** How the tracer of a step comes through: what share of it by when. */
export interface Passage {
  /** s since the injection, even steps from 0. */
  readonly time: Float64Array;
  /** Share that has come, 1 at the end. */
  readonly F: Float64Array;
  /** s, s2: of all of it. */
  readonly mean: number;
  readonly variance: number;
}

/** What a pulse test that stops too early would show of the whole curve. */
export interface Truncated {
  readonly stop: number;
  /** Shares of the whole: area, mean, variance. */
  readonly area: number;
  readonly mean: number;
  readonly variance: number;
}

/**
 * A passage from the answer to a step.
 * @param value concentrations at even steps from 0, settled at the end
 */
export function passageOf(time: Float64Array, value: Float64Array): Passage | undefined {
  const last = value[value.length - 1];
  if (!(last > 0)) return undefined;
  const F = value.map((c) => c / last);
  const { mean, variance } = momentsTo(time, F, time.length - 1);
  return { time, F, mean, variance };
}

/** Mean and variance of what has come by point k, by parts: no derivative of F is taken. */
function momentsTo(t: Float64Array, F: Float64Array, k: number): { area: number; mean: number; variance: number } {
  let [f0, f1] = [0, 0];
  for (let i = 1; i <= k; i++) {
    const h = t[i] - t[i - 1];
    f0 += (h * (F[i] + F[i - 1])) / 2;
    f1 += (h * (t[i] * F[i] + t[i - 1] * F[i - 1])) / 2;
  }
  const area = F[k];
  const mean = t[k] - f0 / area;
  const second = t[k] ** 2 - (2 * f1) / area;
  return { area, mean, variance: Math.max(0, second - mean * mean) };
}

/** What stopping at a time cuts off. */
export function truncated({ time, F, mean, variance }: Passage, stop: number): Truncated {
  let k = time.findIndex((t) => t >= stop);
  if (k < 0) k = time.length - 1;
  const seen = F[k] > 0 ? momentsTo(time, F, k) : { area: 0, mean: 0, variance: 0 };
  return { stop, area: seen.area, mean: seen.mean / mean, variance: variance > 0 ? seen.variance / variance : 1 };
}

/** The first time at which 99 % of the tracer and 98 % of the mean have been seen. */
export function enough(passage: Passage): number {
  const { time, F, mean } = passage;
  let [f0, i] = [0, 1];
  for (; i < time.length - 1; i++) {
    f0 += ((time[i] - time[i - 1]) * (F[i] + F[i - 1])) / 2;
    if (F[i] >= 0.99 && time[i] - f0 / F[i] >= 0.98 * mean) break;
  }
  return time[i];
}

/** When a share has come. */
export function timeOf({ time, F }: Passage, share: number): number {
  const i = F.findIndex((f) => f >= share);
  if (i <= 0) return time[Math.max(0, i)];
  const step = F[i] - F[i - 1];
  return time[i - 1] + (step > 0 ? (share - F[i - 1]) / step : 0) * (time[i] - time[i - 1]);
}
