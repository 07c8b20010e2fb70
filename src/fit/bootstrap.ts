import { normalCdf, studentTQuantile } from "../numerics/distributions.js";
import type { Unit } from "../units/unit.js";
import type { Refits, Resampling } from "./resample.js";
import type { Fit } from "./result.js";

/** What the refits of a bootstrap say of every parameter. */
export interface Bootstrap {
  readonly resampling: Resampling;
  /** Points in a block; 1 where neighbours were drawn one by one. */
  readonly block: number;
  /** Refits asked for, done, and of these not converged. */
  readonly asked: number;
  readonly done: number;
  readonly failed: number;
  readonly parameters: readonly BootstrapParameter[];
}

/** SI. */
export interface BootstrapParameter {
  readonly name: string;
  readonly unit: Unit;
  readonly standardError: number;
  /**
   * Percentiles of the refits, 2.5 and 97.5 or so far beyond them as Student's t lies beyond the normal distribution. A refit whose
   * front lies between two readings counts with the end of that gap.
   */
  readonly interval95: readonly [number, number];
  readonly median: number;
}

/** Fewest refits that a 95 % interval can be read from. */
export const fewestRefits = 40;

/**
 * @param rows  refits in the order of `fit.parameters`, SI, as `Refits` gives them; undefined where one did not converge
 * @see percentile intervals: B. Efron, R. Tibshirani, An Introduction to the Bootstrap, Chapman & Hall 1993, ch. 13; moved outwards for the degrees of freedom:
 * T. C. Hesterberg, Am. Stat. 69 (2015) 371-386
 */
export function bootstrapOf(
  fit: Fit,
  asked: number,
  how: Pick<Refits, "resampling" | "block" | "between">,
  rows: readonly (readonly number[] | undefined)[],
): Bootstrap {
  const good = rows.filter((row) => row !== undefined);
  const outer = fit.freedom > 0 ? normalCdf(-studentTQuantile(0.975, fit.freedom)) : 0.025;
  const parameters = fit.parameters.map(({ name, unit }, j): BootstrapParameter => {
    const values = Float64Array.from(good, (row) => row[j]).sort();
    const mean = values.reduce((sum, v) => sum + v, 0) / values.length;
    const square = values.reduce((sum, v) => sum + (v - mean) ** 2, 0);
    const place = how.between.indexOf(j);
    const ends = (side: 0 | 1): Float64Array =>
      place < 0
        ? values
        : Float64Array.from(good, (row) => row[fit.parameters.length + 2 * place + side] ?? row[j]).sort();
    const told = good.length >= fewestRefits;
    return {
      name,
      unit,
      standardError: good.length > 1 ? Math.sqrt(square / (good.length - 1)) : Number.NaN,
      interval95: told ? [quantile(ends(0), outer), quantile(ends(1), 1 - outer)] : [Number.NaN, Number.NaN],
      median: quantile(values, 0.5),
    };
  });
  return {
    resampling: how.resampling,
    block: how.block,
    asked,
    done: rows.length,
    failed: rows.length - good.length,
    parameters,
  };
}

/** Straight between order statistics, of which the k-th of n is taken for k / (n + 1) (definition 6 of Hyndman & Fan, Am. Stat. 50 (1996) 361-365). */
function quantile(sorted: Float64Array, p: number): number {
  if (sorted.length === 0) return Number.NaN;
  const at = Math.min(sorted.length - 1, Math.max(0, p * (sorted.length + 1) - 1));
  const low = Math.floor(at);
  const high = Math.min(low + 1, sorted.length - 1);
  return sorted[low] + (at - low) * (sorted[high] - sorted[low]);
}
