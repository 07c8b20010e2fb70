import { plotCurves } from "../../draw/curves.js";
import { plotFit } from "../../draw/fit-curve.js";
import { asItStands } from "../../fit/as-it-stands.js";
import type { FittedReading } from "../../fit/result.js";
import type { Network } from "../../model/network.js";
import { readingLabel, type Trial } from "../../model/trial.js";
import { differenceInUnit, inUnit } from "../../units/unit.js";
import type { Figure } from "../input.js";

/** The readings of a trial as they are in their files; beside them its vessel at the file's values, where it names one. */
export function trialFigures(trial: Trial, vessel: Network | undefined): Figure[] {
  const raw = trial.readings.flatMap((r, k): Figure[] => {
    const { series } = r;
    if (!series || r.of?.steady) return [];
    const unit = series.valueUnit;
    const time = vessel?.units.time ?? series.timeUnit;
    const start = trial.injections[0]?.start ?? 0;
    const x = series.time.map((t) => inUnit(t - start, time));
    return [
      {
        name: `reading-${k + 1}`,
        ...plotCurves(
          {
            title: `${trial.title}: ${readingLabel(r)}`,
            x: `time since the ${trial.reacting ? "start" : "injection"}, ${time.name}`,
            y: `reading, ${unit.name}`,
            lines: [],
            points: { x, y: series.value.map((v) => inUnit(v, unit)), label: `${x.length} readings` },
          },
          { untitled: true },
        ),
        caption: `${x.length} readings at '${r.at}', as they stand in ${series.file}.`,
      },
    ];
  });
  const at = vessel && asItStands(vessel, trial);
  return at ? [...raw, ...compared(trial, vessel, at)] : raw;
}

function compared(trial: Trial, { units: { time } }: Network, readings: readonly FittedReading[]): Figure[] {
  const start = trial.injections[0]?.start ?? 0;
  return readings
    .filter((r) => !r.of?.steady)
    .map((r, k) => ({
      name: `vessel-${k + 1}`,
      ...plotFit(
        {
          title: `${trial.title}: ${readingLabel(r)}`,
          timeUnit: time.name,
          value: `${r.of?.name ?? "tracer"}, ${r.unit.name}`,
          lineName: "vessel",
          readings: [
            {
              label: readingLabel(r),
              time: r.time.map((t) => inUnit(t - start, time)),
              measured: r.measured.map((c) => inUnit(c, r.unit)),
              fitted: r.fitted.map((c) => inUnit(c, r.unit)),
              residual: r.residual.map((c) => differenceInUnit(c, r.unit)),
            },
          ],
        },
        { untitled: true },
      ),
      caption:
        "Cleaned readings and the vessel that the trial names, at the values of its file: nothing is fitted but an open scale or baseline.",
    }));
}
