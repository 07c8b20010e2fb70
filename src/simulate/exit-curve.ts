import type { Plant } from "../compile/plant.js";
import { instant } from "./linear-system.js";
import { trace } from "./trace.js";
import { settlingTime } from "./tracer.js";

/** How old what leaves is, over all that is fed: at one outlet, or at all together. Times in s, densities in 1/s. */
export interface ExitCurve {
  /** Smooth part at ascending times, limits from the right; its area and the spikes' make `share`. */
  density(times: Float64Array): Float64Array;
  /** Integral from 0, spikes included. */
  cumulative(times: Float64Array): Float64Array;
  readonly spikes: readonly { readonly time: number; readonly area: number }[];
  /** Where the smooth part jumps or kinks. */
  readonly breaks: readonly number[];
  /** Share of the feed that leaves here. */
  readonly share: number;
  /** When all but 1e-9 has left, at most 60 mean times. */
  readonly end: number;
}

/**
 * The exact exit-age curve of a plant. Every feed counts by its flow.
 * @param outlet name of one outlet; all together where undefined
 */
export function exitCurve(plant: Plant, outlet?: string): ExitCurve {
  return exitCurveTo(
    plant,
    outlet,
    Math.max(...plant.feeds.map((f) => settlingTime(plant, f.name, 1 - 1e-9, mostMeans))),
  );
}

/** Mean times by which a curve is taken to be over. */
const mostMeans = 60;

/** The same up to a time. */
function exitCurveTo(plant: Plant, outlet: string | undefined, end: number): ExitCurve {
  const outlets = plant.outlets.filter((o) => outlet === undefined || o.name === outlet);
  const flow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const parts = plant.feeds.flatMap((f) => {
    const tracing = trace(plant, f.node, end);
    return outlets.map(({ node, flow: leaving }) => {
      return { tracing, node, passages: tracing.passagesAt(node), weight: (f.flow / flow) * leaving };
    });
  });
  const sum = (times: Float64Array, what: "value" | "integral"): Float64Array => {
    const total = new Float64Array(times.length);
    for (const { tracing, node, weight } of parts) {
      const [seen] = tracing.see(instant(1), [{ node, times }]).seen;
      for (let i = 0; i < total.length; i++) total[i] += weight * seen[what][i];
    }
    return total;
  };
  const spikes = parts.flatMap(({ passages, weight }) =>
    passages.flatMap((p) => (p.direct > 0 ? [{ time: p.delay, area: p.direct * weight }] : [])),
  );
  return {
    density: (times) => sum(times, "value"),
    cumulative: (times) => sum(times, "integral"),
    spikes: spikes.sort((a, b) => a.time - b.time),
    breaks: [...new Set(parts.flatMap(({ passages }) => passages.map((p) => p.delay)))].sort((a, b) => a - b),
    share: outlets.reduce((total, o) => total + o.flow, 0) / flow,
    end,
  };
}

/** The time by which a share of what leaves at an outlet has left it, s; NaN where nothing leaves there. */
export function exitTime(plant: Plant, outlet: string | undefined, level: number): number {
  const flow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const mean = plant.volume.active / flow;
  // The end of a curve costs more to find than an early share of it.
  if (plant.follows === undefined && mean > 0) {
    for (const means of [1, 5]) {
      const early = exitCurveTo(plant, outlet, means * mean);
      const [reached] = early.cumulative(Float64Array.of(early.end));
      if (reached >= level * early.share) return timeOn(early, level * early.share);
    }
  }
  const curve = exitCurve(plant, outlet);
  return timeOn(curve, level * curve.share);
}

/** When the integral of a curve reaches a share of all that is fed, s; NaN where it does not up to its end. */
function timeOn(curve: ExitCurve, goal: number): number {
  let low = 0;
  let high = curve.end;
  // Each round narrows the bracket a hundredfold: one run of the engine a round.
  for (let round = 0; round < 6 && high - low > 1e-12 * high; round++) {
    const times = Float64Array.from({ length: 101 }, (_, i) => low + ((high - low) * i) / 100);
    const f = curve.cumulative(times);
    const at = f.findIndex((x) => x >= goal);
    if (at < 0) return Number.NaN;
    if (at === 0) return times[0];
    low = times[at - 1];
    high = times[at];
  }
  return high;
}
