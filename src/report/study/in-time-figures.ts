import { columnWidth } from "../../draw/picture.js";
import { speciesUnits } from "../../reaction/species-units.js";
import type { Prediction } from "../../study/result.js";
import type { Transient } from "../../transient/transient.js";
import type { Figure } from "../input.js";
import { plotTransient } from "./transient-figure.js";

/** For each duty that changes in time, what leaves over time, with the limits that it reports. */
export function inTimeFigures(predictions: readonly Prediction[]): Figure[] {
  const duties = [...new Set(predictions.map((p) => p.duty))];
  return duties.flatMap((duty, k): Figure[] => {
    const { course } = predictions.find((p) => p.duty === duty) ?? {};
    if (!course) return [];
    const { plant, run } = course;
    const units = { time: plant.network.units.time, species: speciesUnits(plant.network, duty, run.species) };
    return [
      {
        name: `in-time-${k + 1}`,
        ...plotTransient(plant, duty, untilSettled(run), units, { untitled: true, width: columnWidth, height: 160 }),
        caption: `${duty.title}: what leaves the vessel as fitted over time, from the start of the duty's clock.`,
      },
    ];
  });
}

/** The run until all is within 1 % of where it ends, and a fifth more; at least a twentieth of it. */
function untilSettled(run: Transient): Transient {
  const [n, last] = [run.species.length, run.times.length - 1];
  let moving = 0;
  for (const { values } of run.outlets) {
    for (let i = 0; i < n; i++) {
      let [low, high] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY];
      for (let k = 0; k <= last; k++) {
        low = Math.min(low, values[k * n + i]);
        high = Math.max(high, values[k * n + i]);
      }
      let k = last;
      while (k > moving && Math.abs(values[k * n + i] - values[last * n + i]) <= 0.01 * (high - low)) k--;
      moving = Math.max(moving, k);
    }
  }
  const shown = Math.min(last + 1, Math.max(Math.ceil(last / 20), Math.ceil(1.2 * moving)));
  return { ...run, times: run.times.subarray(0, shown) };
}
