import { concentrationsOf, type Reading, type Trial } from "../model/trial.js";
import type { Random } from "../numerics/random.js";
import { noiseOf } from "./noise.js";

/**
 * A long log brought down to about so many points by means over neighbours, over more of them the later; what lies before the injection stays apart from what
 * lies after it. Readings of which some are beyond a limit stay as they are.
 */
export function shortened(trial: Trial, reading: Reading, points: number): Reading {
  const { series, censored, stages, doubts } = reading;
  const many = Math.floor((series?.time.length ?? 0) / points);
  if (!series || many < 2 || censored?.some((f) => f !== 0)) return reading;
  const begins = trial.injections[0]?.start ?? Number.NEGATIVE_INFINITY;
  const first = Math.max(
    0,
    series.time.findIndex((t) => t >= begins),
  );
  const bins: [number, number][] = [];
  for (let i = 0; i < series.time.length; ) {
    const early = series.time[i] < begins;
    const width = early ? many : Math.max(1, Math.floor((3 * many * (i - first)) / (series.time.length - first)));
    let to = i + 1;
    while (to < series.time.length && to - i < width && series.time[to] < begins === early) to++;
    bins.push([i, to]);
    i = to;
  }
  const mean = (v: Float64Array): Float64Array =>
    Float64Array.from(bins, ([from, to]) => v.subarray(from, to).reduce((sum, x) => sum + x, 0) / (to - from));
  const { censored: _, ...rest } = reading;
  return {
    ...rest,
    censored: undefined,
    series: { ...series, time: mean(series.time), value: mean(series.value) },
    stages: stages.map((s) => ({ ...s, value: mean(s.value) })),
    doubts: doubts.map(mean),
  };
}

/**
 * The same test on another day: a reading with errors of its scatter added, as well as that is known, which hang together as those before the injection do,
 * and with what its calibration leaves open drawn anew. Concentrations, SI.
 * @returns a function of a stream of random numbers; undefined for a reading without data
 */
export function redrawing(trial: Trial, reading: Reading): ((draw: Random) => Reading) | undefined {
  const { series, stages, doubts } = reading;
  const y = concentrationsOf(reading);
  if (!series || !y) return undefined;
  const { time } = series;
  const begins = trial.injections[0]?.start ?? Number.NEGATIVE_INFINITY;
  const first = time.findIndex((t) => t >= begins);
  const before = first < 0 ? time.length : first;
  const { sd, persistence, from } = noiseOf(time, y, before, reading, trial.injections[0]?.form.is === "step");
  // Of n points the scatter off the line between neighbours tells the noise as n / 2 independent ones do.
  const seen = from === "declared" ? 0 : Math.floor((from === "before the injection" ? before : time.length) / 2);
  const { lag1, spacing } = persistence;
  return (draw) => {
    const of = doubts.map(() => draw.normal());
    const scale = seen > 0 ? Math.sqrt(seen / chiSquared(seen, draw)) : 1;
    let last = 0;
    const drawn = y.map((c, i) => {
      const r = i === 0 || !(lag1 > 0) ? 0 : lag1 ** ((time[i] - time[i - 1]) / spacing);
      last = r * last + Math.sqrt(1 - r * r) * draw.normal();
      return c + scale * sd[i] * last + doubts.reduce((sum, d, k) => sum + of[k] * d[i], 0);
    });
    const end = stages.length - 1;
    return end < 0
      ? { ...reading, series: { ...series, value: drawn } }
      : { ...reading, stages: [...stages.slice(0, end), { ...stages[end], value: drawn }] };
  };
}

function chiSquared(freedom: number, draw: Random): number {
  // Wilson & Hilferty, Proc. Natl. Acad. Sci. 17 (1931) 684-688; exact is dearer, and no closer to what is known of the freedom.
  const third = 2 / (9 * freedom);
  return freedom * Math.max(0.05, 1 - third + draw.normal() * Math.sqrt(third)) ** 3;
}
