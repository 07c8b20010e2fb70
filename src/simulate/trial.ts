import type { Plant } from "../compile/plant.js";
import type { Injection, Trial } from "../model/trial.js";
import { constantRate, type Drive, instant } from "./linear-system.js";
import { moments } from "./moments.js";
import { type AnyEngine, engineFor, trace } from "./trace.js";
import type { NodeLook } from "./tracing.js";

/**
 * What every probe of a trial would read, as concentration (SI) on the trial's clock: dose, flows and sample line as
 * declared, no baseline, no noise. Superposition over the injections, each exact.
 * @param plant  compiled for the flows and constants of the day
 * @param wanted times per reading of the trial, s on the trial's clock, ascending
 * @returns one array per reading, as long as its times
 */
export function trialResponse(
  plant: Plant,
  trial: Trial,
  wanted: readonly { readonly time: Float64Array }[],
  engine: AnyEngine = engineFor(plant),
): Float64Array[] {
  const sums = wanted.map(({ time }) => new Float64Array(time.length));
  const last = wanted.reduce((m, { time }) => Math.max(m, time[time.length - 1] ?? 0), 0);
  for (const injection of trial.injections) {
    const entry = plant.entry.get(injection.at);
    if (entry === undefined) throw new RangeError(`no place '${injection.at}' in the network`);
    const tracing = trace(plant, entry, last - injection.start, engine);
    const { drive, before } = driveOf(plant, injection);
    const steady = before === 0 ? [] : moments(plant, entry);
    const looks = trial.readings.map((reading, i): NodeLook => {
      const node = plant.exit.get(reading.at);
      if (node === undefined) throw new RangeError(`no place '${reading.at}' in the network`);
      const delay = reading.line.delay?.of(plant.env) ?? 0;
      const lag = reading.line.lag?.of(plant.env) ?? 0;
      // A vessel that starts in balance with `from` reads this before anything changes.
      if (before !== 0) {
        const level = (before * steady[node].share) / plant.nodes[node].inflow;
        for (let k = 0; k < sums[i].length; k++) sums[i][k] += level;
      }
      const times = wanted[i].time.map((t) => t - injection.start - delay);
      return { node, times, lag, integral: false };
    });
    const { seen } = tracing.see(drive, looks);
    seen.forEach((s, i) => {
      for (let k = 0; k < s.value.length; k++) sums[i][k] += s.value[k];
    });
  }
  return sums;
}

/** The tracer rate of an injection from its start on, beside a rate `before` that the vessel is in balance with. */
export function driveOf(plant: Plant, injection: Injection): { drive: Drive; before: number } {
  const { form, lasting } = injection;
  if (form.is === "pulse") {
    const amount = form.amount.of(plant.env);
    return { drive: lasting > 0 ? constantRate(amount / lasting, lasting) : instant(amount), before: 0 };
  }
  const node = plant.entry.get(injection.at) as number;
  const flow = plant.nodes[node].inflow;
  if (form.is === "step") {
    // A level is a concentration in what enters, or a dosing rate: the dimension tells (a rate has no length in it).
    const perFlow = form.level.dimension[0] === -3 ? flow : 1;
    const before = (form.from?.of(plant.env) ?? 0) * perFlow;
    return { drive: constantRate(form.level.of(plant.env) * perFlow - before, lasting || undefined), before };
  }
  return { drive: signalDrive(form.table.time, form.table.value, flow, injection.start), before: 0 };
}

/** A measured inlet, straight between its points, nothing before the first and its last value after the last. */
function signalDrive(time: Float64Array, value: Float64Array, flow: number, start: number): Drive {
  const n = time.length;
  const slope = new Float64Array(n);
  for (let i = 0; i + 1 < n; i++) {
    const span = time[i + 1] - time[i];
    slope[i] = span > 0 ? ((value[i + 1] - value[i]) / span) * flow : 0;
  }
  return { amount: 0, times: time.map((t) => t - start), level: value.map((c) => c * flow), slope };
}
