import { evaluateNames } from "../../compile/evaluate.js";
import type { Plant } from "../../compile/plant.js";
import type { Fit } from "../../fit/result.js";
import type { Value } from "../../model/value.js";
import { studentTQuantile } from "../../numerics/distributions.js";

/**
 * The 95 % interval of a value of a fitted network, SI: that of the parameter where it is one; else by the fit's covariance,
 * to first order. Undefined where no fitted parameter is in it, or the data cannot tell one that is.
 */
export function intervalOf(value: Value, plant: Plant, fit: Fit): readonly [number, number] | undefined {
  const { expression } = value;
  const own = expression.type === "name" && fit.parameters.find((p) => p.name === expression.name);
  if (own) return own.interval95;
  const { names, rows } = fit.covariance;
  const at = (settings: Record<string, number>) => value.of(evaluateNames(plant.network, settings));
  const slope = names.map((name) => {
    const step =
      1e-6 * Math.max(Math.abs(fit.values[name]), Math.sqrt(rows[names.indexOf(name)][names.indexOf(name)] || 0));
    if (!(step > 0)) return 0;
    const beside = (by: number) => at({ ...fit.values, [name]: fit.values[name] + by });
    return (beside(step) - beside(-step)) / (2 * step);
  });
  const variance = slope.reduce(
    (sum, a, i) => sum + slope.reduce((inner, b, j) => (a === 0 || b === 0 ? inner : inner + a * b * rows[i][j]), 0),
    0,
  );
  if (!(variance > 0) || !(fit.freedom > 0)) return undefined;
  const half = studentTQuantile(0.975, fit.freedom) * Math.sqrt(variance);
  const middle = at({ ...fit.values });
  return [Math.max(0, middle - half), middle + half];
}
