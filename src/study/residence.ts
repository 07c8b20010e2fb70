import { compile } from "../compile/compile.js";
import type { Plant, Settings } from "../compile/plant.js";
import { settlingTime, tracerResponse } from "../simulate/tracer.js";
import { interval95 } from "./spread.js";

/** How long what enters by one feed stays in the fitted vessel, all outlets together; SI, from the moment it enters. */
export interface Residence {
  readonly feed: string;
  /** s */
  readonly time: Float64Array;
  /** Exit-age density, 1/s, without its spikes. */
  readonly exitAge: Banded;
  /** What leaves undispersed, at one time: shares of the whole. */
  readonly spikes: readonly { readonly time: number; readonly area: number }[];
  /** Share that has left. */
  readonly left: Banded;
  /** Share that is still inside. */
  readonly washout: Banded;
  /** Density of the ages of what is inside, 1/s: washout over the mean. */
  readonly internalAge: Banded;
  /**
   * Escape intensity, exit-age density over washout, 1/s; NaN where next to nothing is left. Where it falls, liquid is
   * held back (Naor & Shinnar, Ind. Eng. Chem. Fundam. 2 (1963) 278, from memory).
   */
  readonly intensity: Banded;
}

/** A curve, and between which curves 95 % of those lie that the fit leaves possible; without these where there are too few. */
export interface Banded {
  readonly value: Float64Array;
  readonly band: { readonly low: Float64Array; readonly high: Float64Array } | undefined;
}

const times = 240;
/** Shares inside below this are mostly rounding. */
const leastInside = 1e-3;
/** A band need not be finer, and a large plant takes its time. */
const mostDraws = 80;
const largestPlant = 400;

/** Of the feed with the largest flow; undefined where the vessel has none, or its curve cannot be worked out. */
export function residenceOf(plant: Plant, draws: readonly Settings[]): Residence | undefined {
  const feed = plant.feeds.reduce((most, f) => (f.flow > most.flow ? f : most), plant.feeds[0])?.name;
  if (feed === undefined || plant.outlets.length === 0) return undefined;
  const end = settlingTime(plant, feed);
  if (!(end > 0) || !Number.isFinite(end)) return undefined;
  // Square spacing: what matters happens early.
  const time = Float64Array.from({ length: times }, (_, k) => end * (k / (times - 1)) ** 2);
  const fitted = curvesOf(plant, feed, time);
  if (!fitted) return undefined;
  const few = plant.nodes.length > largestPlant ? [] : draws.slice(0, mostDraws);
  const possible = few.flatMap((settings) => {
    const drawn = compile(plant.network, settings).plant;
    const curves = drawn && curvesOf(drawn, feed, time);
    return curves ? [curves] : [];
  });
  const banded = (of: (c: Curves) => Float64Array): Banded => ({ value: of(fitted), band: bandOf(possible.map(of)) });
  return {
    feed,
    time,
    spikes: fitted.spikes,
    exitAge: banded((c) => c.exitAge),
    left: banded((c) => c.left),
    washout: banded((c) => c.washout),
    internalAge: banded((c) => c.internalAge),
    intensity: banded((c) => c.intensity),
  };
}

interface Curves extends Record<"exitAge" | "left" | "washout" | "internalAge" | "intensity", Float64Array> {
  readonly spikes: Residence["spikes"];
}

function curvesOf(plant: Plant, feed: string, time: Float64Array): Curves | undefined {
  const result = tracerResponse(plant, { at: feed, form: "pulse" }, time);
  const flow = plant.feeds.find((f) => f.name === feed)?.flow ?? Number.NaN;
  if (result.stopped) return undefined;
  const exitAge = new Float64Array(time.length);
  const left = new Float64Array(time.length);
  const spikes: { time: number; area: number }[] = [];
  let mean = 0;
  for (const r of result.readings) {
    // value is c Q / amount: what leaves here per time is that by the outlet's share of the flow
    const share = (plant.outlets.find((o) => o.name === r.at)?.flow ?? 0) / flow;
    r.value.forEach((v, k) => {
      exitAge[k] += share * v;
    });
    r.cumulative.forEach((v, k) => {
      left[k] += share * v;
    });
    spikes.push(...r.spikes.map((s) => ({ time: s.time, area: s.area * share })));
    mean += r.moments.share * r.moments.mean;
  }
  const washout = left.map((v) => Math.max(0, 1 - v));
  return {
    exitAge,
    left,
    washout,
    spikes,
    internalAge: washout.map((w) => w / mean),
    intensity: exitAge.map((e, k) => (washout[k] > leastInside ? e / washout[k] : Number.NaN)),
  };
}

function bandOf(curves: readonly Float64Array[]): Banded["band"] {
  const length = curves[0]?.length ?? 0;
  const low = new Float64Array(length);
  const high = new Float64Array(length);
  for (let k = 0; k < length; k++) {
    const between = interval95(curves.map((c) => c[k]));
    if (!between && curves.length < 20) return undefined;
    [low[k], high[k]] = between ?? [Number.NaN, Number.NaN];
  }
  return length === 0 ? undefined : { low, high };
}
