import type { CleanCurve } from "./clean.js";
import { type Tail, tailError, tailMoments, tailOf } from "./tail.js";
import { type Rule, weights } from "./weights.js";

/**
 * A curve that moments can be taken of, from the injection on. `density`: E up to a factor. `washout`: what is still
 * to come, 1 - F.
 */
export interface Response {
  readonly is: "density" | "washout";
  readonly time: Float64Array;
  readonly value: Float64Array;
  readonly sd: Float64Array;
  readonly weight: Float64Array;
  readonly tail: Tail;
}

/** What a curve needs to be read: a cleaned reading has it, and a measured inlet. */
export interface Sampled extends Pick<CleanCurve, "time" | "value" | "before"> {
  readonly noise: { readonly sd: Float64Array };
}

/** The curve after a pulse. Points before the injection are left out. */
export function pulseResponse(curve: Sampled, rule: Rule): Response {
  const time = curve.time.subarray(curve.before);
  const value = curve.value.subarray(curve.before);
  const sd = curve.noise.sd.subarray(curve.before);
  return { is: "density", time, value, sd, weight: weights(time, rule), tail: tailOf(time, value, sd) };
}

/** What a step came from and goes to, in the reading's unit. */
export interface Levels {
  readonly from: number;
  readonly to: number;
}

/** The curve after a step as 1 - F, from time 0 on (where it is 1). */
export function stepResponse(curve: Sampled, { from, to }: Levels, rule: Rule): Response {
  const n = curve.time.length - curve.before;
  const lead = n > 0 && curve.time[curve.before] > 0 ? 1 : 0;
  const time = new Float64Array(n + lead);
  const value = new Float64Array(n + lead).fill(1);
  const sd = new Float64Array(n + lead);
  for (let i = 0; i < n; i++) {
    time[i + lead] = Math.max(0, curve.time[curve.before + i]);
    value[i + lead] = curve.time[curve.before + i] < 0 ? 1 : 1 - (curve.value[curve.before + i] - from) / (to - from);
    sd[i + lead] = curve.noise.sd[curve.before + i] / Math.abs(to - from);
  }
  return { is: "washout", time, value, sd, weight: weights(time, rule), tail: tailOf(time, value, sd) };
}

/** Moments about the origin of the injection, with gradients by each point for error bars. SI. */
export interface RawMoments {
  /** Integral of the curve: concentration times s for a pulse, 1 for a step. */
  readonly area: number;
  readonly mean: number;
  readonly variance: number;
  /** Third central moment, s^3. */
  readonly third: number;
  readonly gradient: { readonly mean: Float64Array; readonly variance: Float64Array; readonly third: Float64Array };
  /** One standard error of mean and variance from the doubt in the tail alone. */
  readonly tailError: { readonly mean: number; readonly variance: number };
  /** What the extrapolated tail makes of area, mean and variance: its share of each (variance: about the final mean). */
  readonly tail: { readonly area: number; readonly mean: number; readonly variance: number };
}

/** Moments of a response, its exponential tail added in closed form. Undefined where the area is not above 0. */
export function momentsOf(response: Response): RawMoments | undefined {
  return response.is === "density" ? densityMoments(response) : washoutMoments(response);
}

function densityMoments({ time, value, weight, tail }: Response): RawMoments | undefined {
  const beyond = tailMoments(tail);
  let [m0, m1] = [0, 0];
  for (let i = 0; i < time.length; i++) {
    m0 += weight[i] * value[i];
    m1 += weight[i] * value[i] * time[i];
  }
  const area = m0 + beyond[0];
  if (!(area > 0)) return undefined;
  const mean = (m1 + beyond[1]) / area;
  // About the mean from the start: sums about the origin cancel on a curve far from it.
  let [s2, s3] = [0, 0];
  for (let i = 0; i < time.length; i++) {
    const off = time[i] - mean;
    s2 += weight[i] * value[i] * off * off;
    s3 += weight[i] * value[i] * off ** 3;
  }
  const [tail2, tail3] = aboutMean(beyond, mean);
  const variance = (s2 + tail2) / area;
  const third = (s3 + tail3) / area;
  const by = (f: (off: number) => number): Float64Array => time.map((t, i) => (weight[i] * f(t - mean)) / area);
  return {
    area,
    mean,
    variance,
    third,
    gradient: {
      mean: by((off) => off),
      variance: by((off) => off * off - variance),
      third: by((off) => off ** 3 - 3 * variance * off - third),
    },
    tailError: {
      mean: tailError(tail, ([a, b]) => (m1 + b) / (m0 + a)),
      variance: tailError(tail, (raw) => {
        const [a2] = aboutMean(raw, mean);
        const moved = (m1 + raw[1]) / (m0 + raw[0]) - mean;
        return (s2 + a2) / (m0 + raw[0]) - moved * moved;
      }),
    },
    tail: { area: beyond[0] / area, mean: beyond[1] / (area * mean), variance: tail2 / (area * variance) },
  };
}

const aboutMean = ([a, b, c, d]: readonly [number, number, number, number], m: number): [number, number] => [
  c - 2 * m * b + m * m * a,
  d - 3 * m * c + 3 * m * m * b - m ** 3 * a,
];

function washoutMoments({ time, value, weight, tail }: Response): RawMoments | undefined {
  const beyond = tailMoments(tail);
  const raw = [0, 0, 0];
  for (let i = 0; i < time.length; i++) {
    for (let k = 0; k < 3; k++) raw[k] += (k + 1) * weight[i] * value[i] * time[i] ** k;
  }
  const [r1, r2, r3] = raw.map((m, k) => m + (k + 1) * beyond[k]);
  const variance = r2 - r1 * r1;
  const third = r3 - 3 * r1 * r2 + 2 * r1 ** 3;
  if (!(r1 > 0) || !(variance > 0)) return undefined;
  const by = (f: (off: number) => number): Float64Array => time.map((t, i) => weight[i] * f(t - r1));
  return {
    area: 1,
    mean: r1,
    variance,
    third,
    gradient: {
      mean: by(() => 1),
      variance: by((off) => 2 * off),
      third: by((off) => 3 * (off * off - variance)),
    },
    tailError: {
      mean: tailError(tail, ([a]) => raw[0] + a),
      variance: tailError(tail, ([a, b]) => raw[1] + 2 * b - (raw[0] + a) ** 2),
    },
    tail: {
      area: tail.is === "exponential" ? tail.level : 0,
      mean: beyond[0] / r1,
      variance: (2 * beyond[1] - 2 * r1 * beyond[0]) / variance,
    },
  };
}
