import { median } from "./noise.js";
import { weights } from "./weights.js";

/** Plain figures of a curve, SI; undefined where the curve gives none. For a step, `area` is the level it ends at. */
export interface Measures {
  readonly area: number;
  readonly mean: number | undefined;
  readonly variance: number | undefined;
  readonly t10: number | undefined;
}

/** Area, mean, variance and t10 of the points from `start` on, nothing corrected: what a cleaning step did. */
export function measure(t: Float64Array, y: Float64Array, start: number, isStep: boolean): Measures {
  const found = t.findIndex((s) => s >= start);
  const first = found < 0 ? t.length : found;
  return isStep ? measureStep(t, y, first, start) : measurePulse(t.subarray(first), y.subarray(first));
}

function measurePulse(t: Float64Array, y: Float64Array): Measures {
  const w = weights(t, "trapezoid");
  let [area, m1] = [0, 0];
  for (let i = 0; i < t.length; i++) {
    area += w[i] * y[i];
    m1 += w[i] * y[i] * t[i];
  }
  const none = { area, mean: undefined, variance: undefined, t10: undefined };
  if (!(area > 0)) return none;
  const mean = m1 / area;
  let s2 = 0;
  for (let i = 0; i < t.length; i++) s2 += w[i] * y[i] * (t[i] - mean) ** 2;
  let sum = 0;
  for (let i = 1; i < t.length; i++) {
    const part = ((y[i] + y[i - 1]) / 2) * (t[i] - t[i - 1]);
    if (sum + part >= 0.1 * area) {
      return { area, mean, variance: s2 / area, t10: t[i - 1] + ((0.1 * area - sum) / part) * (t[i] - t[i - 1]) };
    }
    sum += part;
  }
  return { ...none, mean, variance: s2 / area };
}

function measureStep(t: Float64Array, y: Float64Array, first: number, start: number): Measures {
  const n = t.length;
  const from = first > 0 ? median(y.slice(0, first)) : y[0];
  const to = median(y.slice(n - Math.max(1, Math.floor((n - first) / 10))));
  if (first >= n || to === from) return { area: to, mean: undefined, variance: undefined, t10: undefined };
  const rest = y.subarray(first).map((c) => (to - c) / (to - from));
  const since = t.subarray(first).map((s) => s - start);
  const w = weights(since, "trapezoid");
  let [mean, m2] = [since[0], since[0] ** 2];
  for (let i = 0; i < rest.length; i++) {
    mean += w[i] * rest[i];
    m2 += 2 * w[i] * rest[i] * since[i];
  }
  const crossed = rest.findIndex((r) => r <= 0.9);
  return {
    area: to,
    mean: start + mean,
    variance: m2 - mean * mean,
    t10: crossed < 0 ? undefined : t[first + crossed],
  };
}
