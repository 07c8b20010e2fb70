import type { Unit } from "../units/unit.js";
import type { Resampling } from "./resample.js";
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
  /** Between the 2.5th and the 97.5th percentile of the refits. */
  readonly interval95: readonly [number, number];
  readonly median: number;
}

/** Fewest refits that a 95 % interval can be read from. */
export const fewestRefits = 40;

/**
 * @param rows  values of the refits in the order of `fit.parameters`, SI; undefined where one did not converge
 * @see percentile intervals: B. Efron, R. Tibshirani, An Introduction to the Bootstrap, Chapman & Hall 1993, ch. 13
 */
export function bootstrapOf(
  fit: Fit,
  asked: number,
  how: { readonly resampling: Resampling; readonly block: number },
  rows: readonly (readonly number[] | undefined)[],
): Bootstrap {
  const good = rows.filter((row) => row !== undefined);
  const parameters = fit.parameters.map(({ name, unit }, j): BootstrapParameter => {
    const values = Float64Array.from(good, (row) => row[j]).sort();
    const mean = values.reduce((sum, v) => sum + v, 0) / values.length;
    const square = values.reduce((sum, v) => sum + (v - mean) ** 2, 0);
    const told = good.length >= fewestRefits;
    return {
      name,
      unit,
      standardError: good.length > 1 ? Math.sqrt(square / (good.length - 1)) : Number.NaN,
      interval95: told ? [quantile(values, 0.025), quantile(values, 0.975)] : [Number.NaN, Number.NaN],
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

/** Straight between order statistics (definition 7 of Hyndman & Fan, Am. Stat. 50 (1996) 361-365). */
function quantile(sorted: Float64Array, p: number): number {
  if (sorted.length === 0) return Number.NaN;
  const at = p * (sorted.length - 1);
  const low = Math.floor(at);
  const high = Math.min(low + 1, sorted.length - 1);
  return sorted[low] + (at - low) * (sorted[high] - sorted[low]);
}
