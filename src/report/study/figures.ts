import { plotCurves } from "../../draw/curves.js";
import { type FitReading, plotFit } from "../../draw/fit-curve.js";
import { columnWidth } from "../../draw/picture.js";
import type { FittedReading } from "../../fit/result.js";
import { readingLabel, type Trial } from "../../model/trial.js";
import type { FineCurve } from "../../study/fine-curves.js";
import type { StudyResult } from "../../study/result.js";
import { differenceInUnit, inUnit, type Unit } from "../../units/unit.js";
import type { Figure } from "../input.js";
import { residualFigure } from "./residual-figure.js";

/** Measured against fitted of the best rival, and what is left between them, for every trial. */
export function curveFigures(result: StudyResult): Figure[] {
  const best = result.ranking[0];
  const { fit } = best ?? {};
  if (!fit) return [];
  let first = true;
  return result.study.trials.flatMap((trial, k) => {
    const readings = fit.readings.filter((r) => r.trial === trial.title && !r.of?.steady);
    if (readings.length === 0) return [];
    const { time } = best.rival.network.units;
    const start = trial.injections[0]?.start ?? 0;
    const drawn = [
      fitFigure(trial, readings, result.fine, time, start, k),
      residualFigure(fit, trial, readings, time, k, first),
    ];
    first = false;
    return drawn;
  });
}

/** All rivals over the points of the first reading of every trial. */
export function rivalFigures(result: StudyResult): Figure[] {
  const best = result.ranking[0];
  return result.study.trials.flatMap((trial, k) => {
    const measured = best?.fit?.readings.find((r) => r.trial === trial.title && !r.of?.steady);
    if (!measured) return [];
    return rivalFigure(result, trial, measured, best.rival.network.units.time, trial.injections[0]?.start ?? 0, k);
  });
}

function fitFigure(
  trial: Trial,
  readings: readonly FittedReading[],
  fine: StudyResult["fine"],
  time: Unit,
  start: number,
  k: number,
): Figure {
  const unit = readings[0].unit;
  const made = plotFit(
    {
      title: trial.title,
      timeUnit: time.name,
      value: `${trial.reacting ? "concentration" : "tracer"}, ${unit.name}`,
      readings: readings.map((r) => {
        const reading = trial.readings.find((x) => x.at === r.at);
        return {
          label: readingLabel(r),
          time: r.time.map((t) => inUnit(t - start, time)),
          measured: r.measured.map((c) => inUnit(c, unit)),
          fitted: r.fitted.map((c) => inUnit(c, unit)),
          residual: r.residual.map((c) => differenceInUnit(c, unit)),
          ...fineOf(
            fine.get(r.key),
            (t) => inUnit(t - start, time),
            (c) => inUnit(c, unit),
          ),
          leftOut: leftOutOf(trial, r.at, start, time),
          ...(reading?.series ? { source: reading.series.file.replace(/^.*[\\/]/u, "") } : {}),
        };
      }),
    },
    { untitled: true, width: columnWidth },
  );
  return {
    name: `fit-${k + 1}`,
    ...made,
    caption: `${trial.title}: measured points, the curve fitted to all trials at once, and what is left between them. Time counts from the ${trial.reacting ? "start" : "injection"}.`,
  };
}

function fineOf(
  curve: FineCurve | undefined,
  shownTime: (t: number) => number,
  shown: (c: number) => number,
): Pick<FitReading, "fine"> {
  return curve ? { fine: { time: curve.time.map(shownTime), value: curve.value.map(shown) } } : {};
}

function leftOutOf(trial: Trial, at: string, start: number, time: Unit) {
  const reading = trial.readings.find((r) => r.at === at);
  const { series } = reading ?? {};
  if (!reading || !series) return [];
  return reading.leaveOut.flatMap((span) =>
    Array.from(series.time)
      .filter((t) => t >= span.from && t <= span.to)
      .map((t) => ({ time: inUnit(t - start, time), because: span.because })),
  );
}

/** Every rival's curve over the points of a trial, on a logarithmic axis: the tail tells them apart. */
function rivalFigure(
  result: StudyResult,
  trial: Trial,
  measured: FittedReading,
  time: Unit,
  start: number,
  k: number,
): Figure[] {
  const fitted = result.ranking.flatMap((r, place) => {
    const own = r.fit?.readings.find((x) => x.key === measured.key);
    return own ? [{ r, place, own }] : [];
  });
  if (fitted.length < 2) return [];
  const x = measured.time.map((t) => inUnit(t - start, time));
  const shown = (values: Float64Array) => values.map((c) => inUnit(c, measured.unit));
  const made = plotCurves(
    {
      title: `${trial.title}: rivals`,
      x: `time, ${time.name}`,
      y: `${measured.of ? readingLabel(measured) : "tracer"}, ${measured.unit.name}`,
      points: { x, y: shown(measured.measured) },
      lines: fitted.map(({ place, own }, i) => ({ label: letterOf(place), x, y: shown(own.fitted), accent: i === 0 })),
    },
    { log: true, untitled: true, width: columnWidth, height: 200 },
  );
  return [
    {
      name: `rivals-${k + 1}`,
      ...made,
      caption: `${trial.title}: every network fitted to the same points, on a logarithmic axis. ${fitted.map(({ r, place }) => `${letterOf(place)}: ${r.rival.network.title}`).join("; ")}.`,
    },
  ];
}

/** A, B, C by rank: short enough for the end of a line. */
export const letterOf = (place: number): string =>
  place < 26 ? String.fromCharCode(65 + place) : `${letterOf(Math.floor(place / 26) - 1)}${letterOf(place % 26)}`;
