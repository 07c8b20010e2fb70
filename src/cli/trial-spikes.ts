import type { Plant } from "../compile/plant.js";
import type { Reading, Trial } from "../model/trial.js";
import { instant } from "../simulate/linear-system.js";
import { tracerPlant } from "../simulate/tracer-plant.js";
import { trialTracing } from "../simulate/trial-tracing.js";

/** Undispersed tracer at a probe: when (s on the trial's clock) and how much (concentration times s). SI. */
export interface TrialSpike {
  readonly time: number;
  readonly area: number;
}

/** Smaller ones, as a share of dose over flow, are not listed. */
const smallest = 1e-12;

/**
 * What of the trial's instant pulses reaches a probe through tubes alone: no curve of concentrations can show it. A lag
 * of the detector spreads it, then there is none.
 */
export function trialSpikes(liquid: Plant, trial: Trial, reading: Reading, until: number): TrialSpike[] {
  if ((reading.line.lag?.of(liquid.env) ?? 0) > 0) return [];
  const plant = tracerPlant(liquid, trial.tracer);
  const line = reading.line.delay?.of(plant.env) ?? 0;
  const decay = trial.tracer?.decay ?? 0;
  const spikes = trial.injections.flatMap(({ at, start, lasting, form }) => {
    const entry = plant.entry.get(at);
    if (form.is !== "pulse" || lasting > 0 || entry === undefined) return [];
    const amount = form.amount.of(plant.env);
    return reading.places.flatMap(({ name, share }) => {
      const node = plant.exit.get(name);
      if (node === undefined) return [];
      const least = (smallest * amount) / plant.nodes[node].inflow;
      const put = { entry, start, drive: instant(amount), before: 0 };
      return trialTracing(plant, trial, put, until - start)
        .passagesAt(node)
        .map((p) => ({
          time: start + p.delay + line,
          area: share * p.direct * amount * Math.exp(-decay * (p.delay + line)),
        }))
        .filter((s) => s.area > least && s.time <= until);
    });
  });
  return spikes.sort((a, b) => a.time - b.time);
}
