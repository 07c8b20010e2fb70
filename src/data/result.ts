import type { Unit } from "../units/unit.js";
import { one } from "../units/unit.js";
import { type CleanCurve, type CleanStep, productUnit } from "./clean.js";
import { type Figure, figure, type Known } from "./figure.js";
import type { Finding } from "./finding.js";
import { inflation } from "./persistence.js";
import type { Tail } from "./tail.js";
import type { Rule } from "./weights.js";

/** What is known beside the trial, and how to integrate. What is not given leaves the figures out that need it. */
export interface MomentsOptions {
  /** The flow through the place of a reading on the day, m3/s. */
  readonly flowAt?: (at: string) => Known | undefined;
  /** Volume of the vessel, m3, and the whole flow through it, m3/s. */
  readonly volume?: Known | undefined;
  readonly throughflow?: Known | undefined;
  /** The volume is left out because it hangs on parameters that a fit has yet to find. */
  readonly guessed?: boolean;
  /** The unit that volumes are shown in; that of the flow where left out. */
  readonly volumeUnit?: Unit;
  /** How a place stands among the ways out of the vessel. */
  readonly wayOut?: (at: string) => WayOut | undefined;
  /** Flow of each feed, m3/s. */
  readonly feeds?: ReadonlyMap<string, number>;
  /** The vessel has neither feeds nor outlets. */
  readonly closed?: boolean;
  /** The tracer divides as this substance does, not as the liquid: its mean time is not volume over flow. */
  readonly follows?: string;
  /** How areas are summed; left out: cubics between readings, trapezoids where there are few. */
  readonly rule?: Rule;
  /** The unit that times are shown in; that of the reading's own where left out. */
  readonly timeUnit?: Unit;
}

/** How a place stands among the ways out of a vessel. */
export interface WayOut {
  /** True where what passes here is what leaves by an outlet. */
  readonly isOutlet: boolean;
  /** Flow through it over that of all feeds. */
  readonly share: number;
  /** The other outlets that anything leaves by. */
  readonly others: readonly string[];
}

/** A reading without a model. Times count from the injection. */
export interface ReadingMoments {
  readonly at: string;
  readonly unit: Unit;
  readonly timeUnit: Unit;
  readonly area: Figure;
  readonly recovery: Figure;
  /** The share of the flow that leaves here, where there are other outlets: what recovery to expect. */
  readonly expected: number | undefined;
  readonly mean: Figure;
  readonly variance: Figure;
  readonly skewness: Figure;
  readonly t10: Figure;
  readonly t16: Figure;
  readonly t50: Figure;
  readonly t84: Figure;
  readonly t90: Figure;
  /** True where percentiles were shifted by a detector's lag only: they are approximate. */
  readonly percentilesShifted: boolean;
  /** morrill, tanks, peclet; at the one outlet, with volume and flow: holdback, segregation, t10-over-tau, mean-over-tau; with flow: effective-volume. */
  readonly indices: Readonly<Record<string, Figure>>;
  readonly tail: Tail;
  /** What the extrapolated tail makes of each figure: fractions. */
  readonly tailShare: { readonly area: number; readonly mean: number; readonly variance: number };
  readonly noise: {
    readonly sd: Figure;
    readonly from: string;
    /** Correlation of neighbouring errors, and how many independent points all of them are worth; where it is told. */
    readonly lag1?: number;
    readonly effective?: number;
  };
  readonly steps: readonly CleanStep[];
  readonly curve: ReadCurve | undefined;
}

/** The curve read, by points; SI. */
export interface ReadCurve {
  readonly time: Float64Array;
  readonly E: Float64Array;
  readonly F: Float64Array;
  /** One standard error of F, and of W = 1 - F, by the noise of the points. */
  readonly error: Float64Array;
  /** Internal age density, W over the mean, 1/s; undefined where no mean is told. */
  readonly I: Float64Array | undefined;
  /** Escape intensity E / W, 1/s; NaN where W is below five of its errors. */
  readonly L: Float64Array;
}

export interface MomentsResult {
  readonly readings: readonly ReadingMoments[];
  readonly grade: "A" | "B" | "C";
  readonly findings: readonly Finding[];
  /** What was looked for, or asked, and the data or documents do not give; in words. */
  readonly notSupported: readonly string[];
}

/** The scatter of a reading, and how its errors hang together. */
export function noiseFigure({ noise, unit, time }: CleanCurve): ReadingMoments["noise"] {
  const { lag1, from } = noise.persistence;
  return {
    sd: figure(noise.sd[0], unit),
    from: noise.from,
    ...(from ? { lag1, effective: time.length / inflation(lag1) } : {}),
  };
}

/** A reading of which nothing can be said but why. */
export function nothing(curve: CleanCurve, time: Unit): ReadingMoments {
  const none = (unit: Unit): Figure => figure(undefined, unit);
  return {
    at: curve.at,
    unit: curve.unit,
    timeUnit: time,
    area: none(productUnit(`${curve.unit.name} ${time.name}`, curve.unit, time)),
    recovery: none(one),
    expected: undefined,
    mean: none(time),
    variance: none(productUnit(`${time.name}^2`, time, time)),
    skewness: none(one),
    t10: none(time),
    t16: none(time),
    t50: none(time),
    t84: none(time),
    t90: none(time),
    percentilesShifted: false,
    indices: {},
    tail: { is: "open", level: Number.NaN },
    tailShare: { area: 0, mean: 0, variance: 0 },
    noise: noiseFigure(curve),
    steps: curve.steps.map((s) => ({ ...s, mean: undefined, variance: undefined, t10: undefined })),
    curve: undefined,
  };
}
