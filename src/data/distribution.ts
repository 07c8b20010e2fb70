import type { RawMoments, Response } from "./response.js";

/** E and F on the points of a response, and between and beyond them. Times in s. */
export interface Distribution {
  readonly time: Float64Array;
  /** Exit-age density, 1/s. */
  readonly E: Float64Array;
  readonly F: Float64Array;
  /** F at any time; beyond the last point by the fitted tail. */
  cumulative(t: number): number;
  /** The first time at which F reaches p; undefined where the record ends before. */
  quantile(p: number): number | undefined;
}

/**
 * E = c / area and its integral for a pulse (E straight between points, so F is a parabola there); F and its slope for
 * a step. The last point's F is short of 1 by what the tail holds.
 */
export function distributionOf(response: Response, moments: Pick<RawMoments, "area">): Distribution {
  const { time, value, tail } = response;
  const n = time.length;
  const E = new Float64Array(n);
  const F = new Float64Array(n);
  if (response.is === "density") {
    // The trapezoid's own area, so that F ends where the tail begins, whatever rule the moments took.
    let area = 0;
    for (let i = 1; i < n; i++) area += ((value[i] + value[i - 1]) / 2) * (time[i] - time[i - 1]);
    const beyond = tail.is === "exponential" ? tail.level / tail.rate : 0;
    const whole = area + beyond > 0 ? area + beyond : moments.area;
    for (let i = 0; i < n; i++) E[i] = value[i] / whole;
    for (let i = 1; i < n; i++) F[i] = F[i - 1] + ((E[i] + E[i - 1]) / 2) * (time[i] - time[i - 1]);
  } else {
    for (let i = 0; i < n; i++) F[i] = 1 - value[i];
    for (let i = 0; i < n; i++) {
      const [a, b] = [Math.max(0, i - 1), Math.min(n - 1, i + 1)];
      E[i] = time[b] > time[a] ? (F[b] - F[a]) / (time[b] - time[a]) : 0;
    }
  }
  const curved = response.is === "density";
  const left = 1 - F[n - 1];
  const rate = tail.is === "exponential" ? tail.rate : undefined;
  return {
    time,
    E,
    F,
    cumulative(t) {
      if (t <= time[0]) return t < time[0] ? 0 : F[0];
      if (t >= time[n - 1]) return rate === undefined ? F[n - 1] : 1 - left * Math.exp(-rate * (t - time[n - 1]));
      const i = below(time, t);
      const h = time[i + 1] - time[i];
      const x = t - time[i];
      if (!curved) return F[i] + ((F[i + 1] - F[i]) * x) / h;
      return F[i] + E[i] * x + ((E[i + 1] - E[i]) * x * x) / (2 * h);
    },
    quantile(p) {
      if (p <= F[0]) return time[0];
      for (let i = 0; i + 1 < n; i++) {
        if (F[i + 1] < p) continue;
        const h = time[i + 1] - time[i];
        const want = p - F[i];
        if (!curved) return time[i] + (want / (F[i + 1] - F[i])) * h;
        const bend = (E[i + 1] - E[i]) / h;
        // The stable root of E x + bend x^2 / 2 = want.
        return time[i] + (2 * want) / (E[i] + Math.sqrt(Math.max(0, E[i] * E[i] + 2 * bend * want)));
      }
      return rate === undefined || !(left > 0) ? undefined : time[n - 1] + Math.log(left / (1 - p)) / rate;
    },
  };
}

function below(time: Float64Array, t: number): number {
  let [low, high] = [0, time.length - 1];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (time[middle] <= t) low = middle;
    else high = middle;
  }
  return low;
}
