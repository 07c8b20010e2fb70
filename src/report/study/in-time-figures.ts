import { type Curves, plotStacked } from "../../draw/curves.js";
import type { Duty } from "../../model/duty.js";
import { speciesUnits } from "../../reaction/species-units.js";
import type { Prediction } from "../../study/result.js";
import type { Transient } from "../../transient/transient.js";
import { formatQuantity } from "../../units/format.js";
import { inUnit, type Unit } from "../../units/unit.js";
import type { Figure } from "../input.js";

/** For each duty that changes in time, what leaves over time, one plot for each outlet and unit, with the limits that it reports. */
export function inTimeFigures(predictions: readonly Prediction[]): Figure[] {
  const duties = [...new Set(predictions.map((p) => p.duty))];
  return duties.flatMap((duty, k): Figure[] => {
    const first = predictions.find((p) => p.duty === duty);
    if (!first?.course) return [];
    const { network } = first.rival;
    const plots = plotsOf(first.course, duty, speciesUnits(network, duty, first.course.species), network.units.time);
    if (plots.length === 0) return [];
    return [
      {
        name: `in-time-${k + 1}`,
        ...plotStacked(`${duty.title}: in time`, plots, { untitled: true, height: 190 }),
        caption: `${duty.title}: what leaves the vessel as fitted over time, from the start of the duty's clock.`,
      },
    ];
  });
}

function plotsOf(run: Transient, duty: Duty, units: readonly Unit[], time: Unit): Curves[] {
  const n = run.species.length;
  const x = Array.from(run.times.subarray(0, shownOf(run)), (t) => inUnit(t, time));
  const wanted = new Set(duty.report.flatMap((line) => [line.of, line.versus ?? ""]));
  const shown = run.species.map((name, i) => ({ name, i })).filter(({ name }) => wanted.has(name));
  const names = [...new Set(units.map((u) => u.name))];
  return run.outlets.flatMap((outlet): Curves[] =>
    names.flatMap((unit): Curves[] => {
      const own = shown.filter(({ i }) => units[i].name === unit);
      if (own.length === 0 || !(outlet.flow > 0)) return [];
      const limit = duty.report.find((l) => l.limit && l.at === outlet.name && own.some((s) => s.name === l.of))?.limit;
      const of = units[own[0].i];
      return [
        {
          title: `at ${outlet.name}`,
          x: `time, ${time.name}`,
          y: `at ${outlet.name}, ${unit}`,
          lines: own.map(({ name, i }) => ({
            label: name,
            x,
            y: x.map((_, k) => inUnit(outlet.values[k * n + i], of)),
          })),
          ...(limit
            ? {
                level: {
                  at: inUnit(limit.value.of([]), of),
                  label: `limit ${formatQuantity(limit.value.of([]), limit.value.unit ?? of, 3)}`,
                },
              }
            : {}),
        },
      ];
    }),
  );
}

/** Points until all is within 1 % of where it ends, and a fifth more; at least a twentieth of the run. */
function shownOf({ times, outlets, species }: Transient): number {
  const [n, last] = [species.length, times.length - 1];
  let moving = 0;
  for (const { values } of outlets) {
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
  return Math.min(last + 1, Math.max(Math.ceil(last / 20), Math.ceil(1.2 * moving)));
}
