import type { RawMoments, Response } from "./response.js";
import { slopesOf } from "./smooth.js";

/** E and F on the points of a response, and between and beyond them. Times in s. */
export interface Distribution {
  readonly time: Float64Array;
  /** Exit-age density, 1/s. */
  readonly E: Float64Array;
  readonly F: Float64Array;
  /** F at any time; beyond the last point by the fitted tail. */
  cumulative(t: number): number;
  /** The time at which F reaches p, the middle of all where noise lets it do so several times; undefined where the record ends before. */
  quantile(p: number): number | undefined;
}

/**
 * E = c / area and its integral for a pulse; F and its slope for a step. Between points F is the cubic that has the slope E at
 * them, held from overshooting as F. N. Fritsch, R. E. Carlson, SIAM J. Numer. Anal. 17 (1980) 238-246 do. The last point's F is
 * short of 1 by what the tail holds.
 */
export function distributionOf(response: Response, moments: Pick<RawMoments, "area">): Distribution {
  const { time, tail } = response;
  const n = time.length;
  const { E, F } = response.is === "density" ? ofDensity(response, moments) : ofWashout(response);
  const left = 1 - F[n - 1];
  const rate = tail.is === "exponential" ? tail.rate : undefined;
  const within = (i: number) => pieceOf(time[i + 1] - time[i], F[i + 1] - F[i], E[i], E[i + 1]);
  const crossing = (i: number, p: number): number => {
    const risen = within(i);
    let [low, high] = [0, 1];
    while (high - low > 1e-12) {
      const middle = (low + high) / 2;
      if (F[i] + risen(middle) < p) low = middle;
      else high = middle;
    }
    return time[i] + high * (time[i + 1] - time[i]);
  };
  return {
    time,
    E,
    F,
    cumulative(t) {
      if (t <= time[0]) return t < time[0] ? 0 : F[0];
      if (t >= time[n - 1]) return rate === undefined ? F[n - 1] : 1 - left * Math.exp(-rate * (t - time[n - 1]));
      const i = below(time, t);
      return F[i] + within(i)((t - time[i]) / (time[i + 1] - time[i]));
    },
    quantile(p) {
      if (p <= F[0]) return time[0];
      const reached = F.findIndex((f) => f >= p);
      if (reached > 0) {
        let last = reached;
        for (let i = reached; i + 1 < n; i++) if (F[i] < p && F[i + 1] >= p) last = i + 1;
        return (crossing(reached - 1, p) + crossing(last - 1, p)) / 2;
      }
      return rate === undefined || !(left > 0) ? undefined : time[n - 1] + Math.log(left / (1 - p)) / rate;
    },
  };
}

/** The rise of F from the start of an interval to the share x of it: a cubic with these slopes at its ends; a line where it falls. */
function pieceOf(h: number, rise: number, first: number, last: number): (x: number) => number {
  if (!(rise > 0) || !(h > 0)) return (x) => rise * x;
  const [a, b] = [first, last].map((slope) => Math.max(0, (slope * h) / rise));
  // Within a circle of radius 3 the cubic never turns.
  const less = Math.min(1, 3 / Math.hypot(a, b));
  const [u, v] = [less * a, less * b];
  return (x) => rise * x * (u + x * (3 - 2 * u - v + x * (u + v - 2)));
}

/** The curve's own area, so that F ends where the tail begins, whatever rule the moments took. */
function ofDensity(
  { time, value, tail, sampling }: Response,
  moments: Pick<RawMoments, "area">,
): Pick<Distribution, "E" | "F"> {
  const F = new Float64Array(time.length);
  const slope = slopesOf(time, value, sampling.smooth);
  for (let i = 1; i < F.length; i++) {
    const h = time[i] - time[i - 1];
    const bent = sampling.smooth[i - 1] === 1 ? ((slope[i - 1] - slope[i]) * h * h) / 12 : 0;
    F[i] = F[i - 1] + ((value[i] + value[i - 1]) / 2) * h + bent;
  }
  const beyond = tail.is === "exponential" ? tail.level / tail.rate : 0;
  const area = F[F.length - 1] + beyond;
  const whole = area > 0 ? area : moments.area;
  return { E: value.map((c) => c / whole), F: F.map((f) => f / whole) };
}

function ofWashout({ time, value, sampling }: Response): Pick<Distribution, "E" | "F"> {
  return { E: slopesOf(time, value, sampling.smooth).map((s) => -s), F: value.map((w) => 1 - w) };
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
