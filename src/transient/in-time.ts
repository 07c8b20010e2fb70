import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { DutySettings } from "../reaction/conditions.js";
import type { Figure } from "../reaction/figures.js";
import { settlingTime } from "../simulate/tracer.js";
import { comesBack, lastChange } from "./course-line.js";
import { transientFigures } from "./figures.js";
import { plantAfter } from "./flows.js";
import { backAt } from "./passage.js";
import { type Transient, transient } from "./transient.js";

/** Fine enough for draws: far finer than what is drawn. */
const roughly = { relative: 1e-6, absolute: 1e-9, balance: false };

/** Mean times after the last change that are followed at least: behind a tube tracer is over the moment that it comes. */
const leastMeans = 3;

/**
 * s: when a duty is over that starts at 0: after the last change, when a tracer put in then would have left (to 0.1 %), and at
 * least three mean times.
 */
export function endOf(plant: Plant, duty: Duty): number {
  const after = [plant, plantAfter(plant, duty)].map((then) => {
    const fed = then.feeds.filter((f) => f.flow > 0);
    const mean = then.volume.active / fed.reduce((sum, f) => sum + f.flow, 0);
    const least = Number.isFinite(mean) ? leastMeans * mean : 0;
    return Math.max(least, ...fed.map((f) => settlingTime(then, f.name)));
  });
  return lastChange(duty) + Math.max(...after);
}

/** Of the way to the end that is left empty behind what comes back. */
const margin = 0.1;

/**
 * s: up to when a duty is worth looking at: where all that changes comes back, until everything that leaves is within 1 % of its
 * height of where it was, and what a figure asks for is over; else its end.
 */
export function worthSeeing(plant: Plant, duty: Duty): number {
  const end = endOf(plant, duty);
  if (duty.contents || !comesBack(duty)) return end;
  const run = roughRun(plant, duty);
  if (run.stopped) return end;
  const size = run.species.length + (duty.heat ? 1 : 0);
  const back = run.outlets
    .filter((o) => o.flow > 0)
    .flatMap(({ name }) => Array.from({ length: size }, (_, i) => backAt(run.look(name), size, i, end)));
  const over = transientFigures(plant, duty, run).flatMap((f) => (f.beyond?.spans ?? []).map(({ to }) => to));
  return Math.min(end, (1 + margin) * Math.max(lastChange(duty), ...back, ...over));
}

/** True where a duty reports something that only time shows. */
export const asksForTime = (duty: Duty): boolean => duty.report.some((line) => line.what === "time-beyond");

/** A duty in time up to its end, as coarsely as many runs in a row allow; `look` at the places of its times beyond limits. */
export function roughRun(plant: Plant, duty: Duty, settings: DutySettings = {}): Transient {
  const at = duty.report.flatMap((line) => (line.what === "time-beyond" && line.at !== undefined ? [line.at] : []));
  return transient(plant, duty.chemistry, duty, [0, endOf(plant, duty)], { ...roughly, settings, at });
}

/**
 * Figures of a steady state with those that only time shows put in: what is above or below a limit for how long, from the
 * start of the duty until it is over; infinite where it is still so then, since from there on nothing changes.
 */
export function withTimes(
  plant: Plant,
  duty: Duty,
  figures: readonly Figure[],
  settings: DutySettings = {},
): readonly Figure[] {
  if (!asksForTime(duty)) return figures;
  const run = roughRun(plant, duty, settings);
  const times = transientFigures(plant, duty, run, settings).map(
    (f): Figure => (f.beyond?.stillAtEnd ? { ...f, value: Number.POSITIVE_INFINITY, why: "infinite" } : f),
  );
  return figures.map((f, k) => (duty.report[k]?.what === "time-beyond" ? times[k] : f));
}
