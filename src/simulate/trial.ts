import type { Plant } from "../compile/plant.js";
import type { Reading, Trial } from "../model/trial.js";
import { moments } from "./moments.js";
import { type Put, putsOf } from "./puts.js";
import type { AnyEngine } from "./trace.js";
import { tracerPlant } from "./tracer-plant.js";
import type { NodeLook, Tracing } from "./tracing.js";
import { trialTracing } from "./trial-tracing.js";

/**
 * What every probe of a trial would read, as concentration (SI) on the trial's clock: dose, flows and sample line as
 * declared, no baseline, no noise. Superposition over the injections and what was inside at the start, each exact.
 * @param liquid compiled for the flows and constants of the day
 * @param wanted times per reading of the trial, s on the trial's clock, ascending
 * @returns one array per reading, as long as its times
 */
export function trialResponse(
  liquid: Plant,
  trial: Trial,
  wanted: readonly { readonly time: Float64Array }[],
  engine?: AnyEngine,
): Float64Array[] {
  return followTrial(liquid, trial, wanted, engine).curves;
}

/** The same, and where and when an engine gave up, if it did: what comes later is NaN. */
export function followTrial(
  liquid: Plant,
  trial: Trial,
  wanted: readonly { readonly time: Float64Array }[],
  engine?: AnyEngine,
): TrialCurves {
  const plant = tracerPlant(liquid, trial.tracer);
  const single = trial.readings.every((r) => r.places.length === 1);
  if (single) return seenSingly(plant, liquid, trial, wanted, engine);
  const parts = trial.readings.flatMap((r, i) =>
    r.places.map(({ name, share }) => ({ i, share, reading: { ...r, at: name } })),
  );
  const readings = parts.map(({ reading }) => reading);
  const times = parts.map(({ i }) => wanted[i]);
  const { curves, stopped } = seenSingly(plant, liquid, { ...trial, readings }, times, engine);
  const sums = wanted.map(({ time }) => new Float64Array(time.length));
  parts.forEach(({ i, share }, p) => {
    for (let k = 0; k < sums[i].length; k++) sums[i][k] += share * curves[p][k];
  });
  return { curves: sums, stopped };
}

export interface TrialCurves {
  /** One array per reading, as long as its times. */
  readonly curves: Float64Array[];
  /** Where and when, in words; undefined where all was reached. */
  readonly stopped: string | undefined;
}

/** The same where every reading draws from one place, `at`; the liquid's plant tells flows, the tracer's all else. */
function seenSingly(
  plant: Plant,
  liquid: Plant,
  trial: Trial,
  wanted: readonly { readonly time: Float64Array }[],
  engine?: AnyEngine,
): TrialCurves {
  const sums = wanted.map(({ time }) => new Float64Array(time.length));
  const last = wanted.reduce((m, { time }) => Math.max(m, time[time.length - 1] ?? 0), 0);
  let stopped: string | undefined;
  const decay = trial.tracer?.decay ?? 0;
  for (const put of putsOf(plant, trial, liquid)) {
    const own = wanted.map(({ time }) => new Float64Array(time.length));
    const tracing = trialTracing(plant, trial, put, last - put.start, engine);
    const steady = typeof put.entry === "number" && put.before !== 0 ? moments(plant, put.entry) : [];
    const seenAt = trial.readings.map((reading) => seenBy(plant, reading));
    const looks = seenAt.map(({ node, delay, lag }, i): NodeLook => {
      // A vessel that starts in balance with `from` reads this before anything changes.
      const settled = put.before === 0 ? 0 : (put.before * steady[node].share) / plant.nodes[node].inflow;
      const level = settled + (put.still?.node === node ? put.still.level : 0);
      if (level !== 0) own[i].fill(level);
      const from = put.begins ?? Number.NEGATIVE_INFINITY;
      const times = wanted[i].time.map((t) => Math.max(t - delay, from) - put.start);
      return { node, times, lag, integral: false };
    });
    const { seen, stopped: why } = tracing.see(put.drive, looks);
    stopped ??= why;
    if (put.begins !== undefined) addSettled(own, tracing, put, seenAt, wanted);
    seen.forEach((s, i) => {
      const left = (t: number): number => (decay === 0 ? 1 : Math.exp(-decay * (t - (put.begins ?? put.start))));
      for (let k = 0; k < s.value.length; k++) sums[i][k] += left(wanted[i].time[k]) * (own[i][k] + s.value[k]);
    });
  }
  return { curves: sums, stopped };
}

/** How a reading sees the vessel: the node, and the sample line and detector before it, s. */
interface SeenAt {
  readonly node: number;
  readonly delay: number;
  readonly lag: number;
}

function seenBy(plant: Plant, { at, line }: Reading): SeenAt {
  const node = plant.exit.get(at);
  if (node === undefined) throw new RangeError(`no place '${at}' in the network`);
  return { node, delay: line.delay?.of(plant.env) ?? 0, lag: line.lag?.of(plant.env) ?? 0 };
}

/** A detector with a lag has settled, when the vessel starts, at what it holds: that reading fades. */
function addSettled(
  sums: readonly Float64Array[],
  tracing: Tracing,
  put: Put,
  seenAt: readonly SeenAt[],
  wanted: readonly { readonly time: Float64Array }[],
): void {
  const begins = put.begins ?? put.start;
  const times = Float64Array.of(begins - put.start);
  const late = seenAt.flatMap(({ node, delay, lag }, i) => (lag > 0 ? [{ node, delay, lag, i }] : []));
  if (late.length === 0) return;
  const { seen } = tracing.see(
    put.drive,
    late.map(({ node }) => ({ node, times, integral: false })),
  );
  late.forEach(({ delay, lag, i }, k) => {
    wanted[i].time.forEach((t, j) => {
      sums[i][j] += seen[k].value[0] * Math.exp(-Math.max(0, t - delay - begins) / lag);
    });
  });
}
