import { modelOf } from "../fit/model-of.js";
import type { Fit, FittedReading } from "../fit/result.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { factorColumns, solveLeastSquares } from "../numerics/qr.js";
import { trialOn } from "../resolve/trial-on.js";

/** A fitted curve between its readings: s on the trial's clock, SI. */
export interface FineCurve {
  readonly time: Float64Array;
  readonly value: Float64Array;
}

/** Readings of fewer samples than this do not show the curve that was fitted to them. */
const few = 100;
const points = 161;
/** The curve must be that of the fit to so much of its height, where both are known. */
const same = 1e-5;

/**
 * The fitted curves of readings with few samples, on a fine grid from the first to the last, by the key of the reading. A reading
 * is left out where the model's curve, scaled and on its baseline, is not the fitted one at the samples: where a trial has more
 * unknowns of its own than that.
 */
export function fineCurves(network: Network, trials: readonly Trial[], fit: Fit): ReadonlyMap<string, FineCurve> {
  const sparse = fit.readings.filter((r) => !r.of?.steady && r.time.length > 2 && r.time.length < few);
  const found = new Map<string, FineCurve>();
  if (sparse.length === 0) return found;
  const { model, whole } = modelOf(network, trials);
  for (const trial of trials) {
    const own = sparse.filter((r) => r.trial === trial.title);
    if (own.length === 0) continue;
    const on = trialOn(whole, trial);
    const fine = own.map((r) => between(r.time));
    // A reading whose curve is not asked for is asked at no time.
    const asked = trial.readings.map((reading) => own.findIndex((r) => r.at === reading.at && sameSpecies(r, reading)));
    const wanted = asked.map((k) => ({
      time: k < 0 ? new Float64Array(0) : Float64Array.from([...own[k].time, ...fine[k]]).sort(),
    }));
    const curves = model.respond(on, fit.values, wanted);
    if (!curves) continue;
    asked.forEach((k, i) => {
      if (k < 0) return;
      const value = fittedOn(own[k], fine[k], wanted[i].time, curves[i]);
      if (value) found.set(own[k].key, { time: fine[k], value });
    });
  }
  return found;
}

const sameSpecies = (r: FittedReading, reading: Trial["readings"][number]): boolean =>
  r.of?.species === reading.of?.species;

function between(time: Float64Array): Float64Array {
  const [from, to] = [Math.min(...time), Math.max(...time)];
  return Float64Array.from({ length: points }, (_, k) => from + ((to - from) * k) / (points - 1));
}

/** The model's curve brought to the fitted one by a scale and a straight baseline; undefined where that does not do it. */
function fittedOn(
  { time, fitted }: FittedReading,
  fine: Float64Array,
  known: Float64Array,
  curve: Float64Array,
): Float64Array | undefined {
  const at = new Map(Array.from(known, (t, i) => [t, curve[i]]));
  const model = (t: number): number => at.get(t) ?? Number.NaN;
  const span = fine[fine.length - 1] - fine[0] || 1;
  const height = Math.max(...fitted.map(Math.abs)) || 1;
  const rise = Math.max(...Array.from(time, (t) => Math.abs(model(t)))) || 1;
  const terms = (t: number): number[] => [model(t) / rise, 1, (t - fine[0]) / span];
  // The fewest terms that do: a drift is not to be made of rounding.
  for (const n of [1, 2, 3]) {
    const columns = Float64Array.from([0, 1, 2].slice(0, n).flatMap((j) => Array.from(time, (t) => terms(t)[j])));
    if (time.length <= n || columns.some(Number.isNaN)) return undefined;
    const c = solveLeastSquares(factorColumns(columns, time.length, n), fitted);
    const by = (t: number): number => terms(t).reduce((sum, v, j) => (j < n ? sum + v * c[j] : sum), 0);
    if (time.every((t, i) => Math.abs(by(t) - fitted[i]) <= same * height)) return fine.map(by);
  }
  return undefined;
}
