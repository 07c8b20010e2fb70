import type { Baseline } from "./baseline.js";
import type { CleanCurve } from "./clean.js";
import type { RawFour } from "./decay.js";
import { type Sampling, samplingOf } from "./fronts.js";
import { type Hidden, slowest } from "./hidden-tail.js";
import { inflation, type Persistence } from "./persistence.js";
import type { SlowTail } from "./slow-tail.js";
import { type Tail, tailError, tailGradient, tailMoments, tailOf } from "./tail.js";
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
  readonly hidden?: Hidden | undefined;
  /** What the samples leave open between them. */
  readonly sampling: Sampling;
  /** Of a step: what else moves all points of it together. */
  readonly ends?: Ends;
}

/** What the level that a step comes from and the one that it ends at leave open. */
export interface Ends {
  /** So many last points make the final level: their errors are in every point, as F there. 0 where it was declared. */
  readonly points: number;
  /** One standard error of the final level, and of the first one, over the step. */
  readonly last: number;
  readonly first: number;
}

/** What a curve needs to be read: a cleaned reading has it, and a measured inlet. */
export interface Sampled extends Pick<CleanCurve, "time" | "value" | "before"> {
  readonly noise: { readonly sd: Float64Array; readonly persistence?: Pick<Persistence, "lag1"> };
  readonly baseline?: Baseline | undefined;
  /** When the injection began; where left out nothing is made of the time before the first point. */
  readonly start?: number;
}

/**
 * The curve after a pulse. Points before the injection are left out; from its beginning to the first point after it the
 * curve is taken to rise in a straight line from nothing, which may be anything between nothing and twice that.
 */
export function pulseResponse(curve: Sampled, rule: Rule): Response {
  const { before, start } = curve;
  const seen = [curve.time, curve.value, curve.noise.sd].map((y) => y.subarray(before));
  const gap = start === undefined || seen[0].length === 0 ? 0 : seen[0][0] - start;
  const lead = gap > 0 ? [start ?? 0, 0, 0] : undefined;
  const [time, value, sd] = lead ? seen.map((y, i) => led(lead[i], y)) : seen;
  const joint = curve.baseline?.tail;
  const tail = joint ? jointTail(joint) : tailOf(time, value, sd, growth(curve));
  const sampling = samplingOf(time, value, sd);
  if (lead) {
    sampling.smooth[0] = 0;
    sampling.unsure[0] = (gap * Math.abs(value[1])) / Math.sqrt(12);
  }
  return {
    is: "density",
    time,
    value,
    sd,
    weight: weights(time, rule, sampling.smooth),
    sampling,
    tail,
    // A tail that is seen to be slow beside the record hides none slower that would count.
    hidden:
      tail.is === "exponential" && tail.rate * time[time.length - 1] < slowest.alone
        ? undefined
        : curve.baseline?.hidden,
  };
}

const growth = ({ noise }: Sampled): number => inflation(noise.persistence?.lag1 ?? 0);

function led(first: number, y: Float64Array): Float64Array {
  const longer = new Float64Array(y.length + 1);
  longer[0] = first;
  longer.set(y, 1);
  return longer;
}

const jointTail = (joint: SlowTail): Tail => ({
  is: "exponential",
  end: joint.end,
  level: joint.level,
  rate: joint.rate,
  from: joint.from,
  points: joint.points,
  centreError: 0,
  rateError: 0,
  middle: joint.end,
  joint,
});

/** What a step came from and goes to, in the reading's unit. */
export interface Levels {
  readonly from: number;
  readonly to: number;
  readonly ends?: Ends;
}

/** The curve after a step as 1 - F, from time 0 on (where it is 1). */
export function stepResponse(curve: Sampled, { from, to, ends }: Levels, rule: Rule): Response {
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
  const sampling = samplingOf(time, value, sd);
  return {
    is: "washout",
    time,
    value,
    sd,
    weight: weights(time, rule, sampling.smooth),
    tail: tailOf(time, value, sd, growth(curve)),
    sampling,
    ...(ends ? { ends } : {}),
  };
}

/** Moments about the origin of the injection, with what moves them for error bars. SI. */
export interface RawMoments {
  /** Integral of the curve: concentration times s for a pulse, 1 for a step. */
  readonly area: number;
  readonly mean: number;
  readonly variance: number;
  /** Third central moment, s^3. */
  readonly third: number;
  /** By how much each changes for one more unit of integral at a time. */
  readonly impact: Readonly<Record<"area" | "mean" | "variance" | "third", (time: number) => number>>;
  /** What the tail leaves open of each figure. */
  readonly doubt: Readonly<Record<keyof typeof figures, TailDoubt>>;
  /** What the extrapolated tail makes of area, mean and variance: its share of each (variance: about the final mean). */
  readonly tail: { readonly area: number; readonly mean: number; readonly variance: number };
}

/** What the tail alone leaves open of a figure. */
export interface TailDoubt {
  /** One standard error. */
  readonly error: number;
  /** For a tail fitted together with the baseline: change by its level and by its rate. */
  readonly gradient: readonly [level: number, rate: number];
  /** By how much a tail that a baseline may have taken away would move it. */
  readonly hidden: number;
}

type Central = Pick<RawMoments, "area" | "mean" | "variance" | "third">;

/** The figures that carry an error. `relative`: variance over squared mean. */
export const figures = {
  area: (m: Central) => m.area,
  mean: (m: Central) => m.mean,
  variance: (m: Central) => m.variance,
  skewness: (m: Central) => m.third / m.variance ** 1.5,
  relative: (m: Central) => m.variance / m.mean ** 2,
} as const;

/** @param of moments with a tail of these raw moments */
function doubtsOf({ tail, time, hidden }: Response, of: (raw: RawFour) => Central): RawMoments["doubt"] {
  const end = time[time.length - 1];
  const beyond = tailMoments(tail);
  const moved = beyond.map((m, k) => m + (hidden?.raw[k] ?? 0)) as unknown as RawFour;
  const doubt = (figure: (m: Central) => number): TailDoubt => {
    const by = (raw: RawFour): number => figure(of(raw));
    return {
      error: tailError(tail, end, by),
      gradient: tailGradient(tail, by),
      hidden: Math.abs(by(moved) - by(beyond)),
    };
  };
  return {
    area: doubt(figures.area),
    mean: doubt(figures.mean),
    variance: doubt(figures.variance),
    skewness: doubt(figures.skewness),
    relative: doubt(figures.relative),
  };
}

/** Moments of a response, its exponential tail added in closed form. Undefined where the area is not above 0. */
export function momentsOf(response: Response): RawMoments | undefined {
  return response.is === "density" ? densityMoments(response) : washoutMoments(response);
}

function densityMoments(response: Response): RawMoments | undefined {
  const { time, value, weight, tail } = response;
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
  const by = (f: (off: number) => number) => (t: number) => f(t - mean) / area;
  return {
    area,
    mean,
    variance,
    third,
    impact: {
      area: () => 1,
      mean: by((off) => off),
      variance: by((off) => off * off - variance),
      third: by((off) => off ** 3 - 3 * variance * off - third),
    },
    doubt: doubtsOf(response, (raw) => {
      const whole = m0 + raw[0];
      const moved = (m1 + raw[1]) / whole - mean;
      const [a2, a3] = aboutMean(raw, mean);
      const second = (s2 + a2) / whole - moved ** 2;
      return {
        area: whole,
        mean: mean + moved,
        variance: second,
        third: (s3 + a3) / whole - 3 * moved * second - moved ** 3,
      };
    }),
    tail: { area: beyond[0] / area, mean: beyond[1] / (area * mean), variance: tail2 / (area * variance) },
  };
}

const aboutMean = ([a, b, c, d]: RawFour, m: number): [number, number] => [
  c - 2 * m * b + m * m * a,
  d - 3 * m * c + 3 * m * m * b - m ** 3 * a,
];

function washoutMoments(response: Response): RawMoments | undefined {
  const { time, value, weight, tail } = response;
  const beyond = tailMoments(tail);
  const raw = [0, 0, 0];
  for (let i = 0; i < time.length; i++) {
    for (let k = 0; k < 3; k++) raw[k] += (k + 1) * weight[i] * value[i] * time[i] ** k;
  }
  const [r1, r2, r3] = raw.map((m, k) => m + (k + 1) * beyond[k]);
  const variance = r2 - r1 * r1;
  const third = r3 - 3 * r1 * r2 + 2 * r1 ** 3;
  if (!(r1 > 0) || !(variance > 0)) return undefined;
  const by = (f: (off: number) => number) => (t: number) => f(t - r1);
  return {
    area: 1,
    mean: r1,
    variance,
    third,
    impact: {
      area: () => 0,
      mean: by(() => 1),
      variance: by((off) => 2 * off),
      third: by((off) => 3 * (off * off - variance)),
    },
    doubt: doubtsOf(response, (beyond) => {
      const [q1, q2, q3] = raw.map((m, k) => m + (k + 1) * beyond[k]);
      return { area: 1, mean: q1, variance: q2 - q1 * q1, third: q3 - 3 * q1 * q2 + 2 * q1 ** 3 };
    }),
    tail: {
      area: tail.is === "exponential" ? tail.level : 0,
      mean: beyond[0] / r1,
      variance: (2 * beyond[1] - 2 * r1 * beyond[0]) / variance,
    },
  };
}
