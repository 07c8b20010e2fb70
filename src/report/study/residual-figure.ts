import { columnWidth } from "../../draw/picture.js";
import { plotResiduals, type ResidualReading } from "../../draw/residuals.js";
import type { Fit, FittedReading } from "../../fit/result.js";
import { readingLabel, type Trial } from "../../model/trial.js";
import { inUnit, type Unit } from "../../units/unit.js";
import type { Figure } from "../input.js";

const mostLags = 25;

/**
 * What the fit leaves of a trial's readings in standard deviations, and how neighbours hang together.
 * @param first  of its kind on the page: the others need not say again how to read it
 */
export function residualFigure(
  fit: Fit,
  trial: Trial,
  readings: readonly FittedReading[],
  time: Unit,
  k: number,
  first: boolean,
): Figure {
  const start = trial.injections[0]?.start ?? 0;
  const sd = spreadOf(fit);
  const rows = readings.map((r): ResidualReading => {
    const value = r.residual.map((v, i) => (v * r.weight[i]) / sd);
    return {
      label: readingLabel(r),
      time: r.time.map((t) => inUnit(t - start, time)),
      value,
      autocorrelation: autocorrelation(value, Math.min(mostLags, Math.floor(value.length / 4))),
    };
  });
  const made = plotResiduals(
    { title: `${trial.title}: residuals`, timeUnit: time.name, readings: rows },
    { untitled: true, width: columnWidth },
  );
  return {
    name: `residuals-${k + 1}`,
    ...made,
    caption: `${trial.title}: weighted residuals and how neighbours hang together.${first ? " In the shaded bands lie 95 % of what independent residuals would give: a pattern, or bars beyond the band, is curve that this network does not explain, or noise that comes in waves." : ""}`,
  };
}

/** Standard deviation of the weighted residuals over all readings, with the fit's degrees of freedom. */
function spreadOf(fit: Fit): number {
  let sum = 0;
  let n = 0;
  for (const r of fit.readings) {
    r.residual.forEach((v, i) => {
      sum += (v * r.weight[i]) ** 2;
    });
    n += r.residual.length;
  }
  return Math.sqrt(sum / Math.max(1, n - fit.freeParameters)) || 1;
}

/** Correlation of a series with itself 1 to `lags` places later (Box & Jenkins 1970, section 2.1.5, from memory). */
export function autocorrelation(series: ArrayLike<number>, lags: number): Float64Array {
  const n = series.length;
  let mean = 0;
  for (let i = 0; i < n; i++) mean += series[i] / n;
  const product = (lag: number): number => {
    let sum = 0;
    for (let i = 0; i + lag < n; i++) sum += (series[i] - mean) * (series[i + lag] - mean);
    return sum;
  };
  const all = product(0);
  return Float64Array.from({ length: lags }, (_, k) => (all > 0 ? product(k + 1) / all : 0));
}
