import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { DutySettings } from "../reaction/conditions.js";
import type { Figure } from "../reaction/figures.js";
import { settlingTime } from "../simulate/tracer.js";
import { transientFigures } from "../transient/figures.js";
import { changes, lastChange } from "../transient/inputs.js";
import { type Transient, type TransientOptions, transient } from "../transient/transient.js";

/** Does a duty report anything that only a transient tells? */
export const asksForTime = (duty: Duty): boolean => duty.report.some((line) => line.what === "time-beyond");

/** Does a duty go on in time at all? */
export const goesOn = (duty: Duty): boolean => changes(duty) || duty.contents !== undefined;

/** When a transient is over: the last change and what it takes to be washed out, s. */
export const horizonOf = (plant: Plant, duty: Duty): number =>
  lastChange(duty) + Math.max(...plant.feeds.filter((f) => f.flow > 0).map((f) => settlingTime(plant, f.name)));

/** The same accuracy in every digit that a reader sees, for many runs in a row. */
const forDraws: TransientOptions = { balance: false, relative: 1e-7, absolute: 1e-9 };

/** Figures of a duty with those that only time tells taken from a transient; the others as they are. */
export function withTimes(
  plant: Plant,
  duty: Duty,
  figures: readonly Figure[],
  settings: DutySettings = {},
): readonly Figure[] {
  if (!asksForTime(duty)) return figures;
  const lines = duty.report.filter((line) => line.what === "time-beyond");
  const at = [...new Set(lines.flatMap((line) => line.at ?? []))];
  const end = horizonOf(plant, duty);
  const run = transient(plant, duty.chemistry, duty, [0, end], { ...forDraws, settings, at });
  const told = transientFigures(plant, { ...duty, report: lines }, run, settings);
  return figures.map((f, k) => {
    const own = lines.indexOf(duty.report[k]);
    return own < 0 ? f : told[own];
  });
}

/** Fine: what happens after the last change is often over long before all is washed out. */
const points = 961;

/** A duty in time, for a picture; undefined where nothing of it changes. */
export function overTime(plant: Plant, duty: Duty): Transient | undefined {
  if (!goesOn(duty)) return undefined;
  const end = horizonOf(plant, duty);
  if (!(end > 0) || !Number.isFinite(end)) return undefined;
  const times = Float64Array.from({ length: points }, (_, k) => (end * k) / (points - 1));
  return transient(plant, duty.chemistry, duty, times, { at: [], balance: false });
}
