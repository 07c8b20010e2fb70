import { studentTQuantile } from "../numerics/distributions.js";

/** A reading that the others contradict, and that rules the fit all the same. */
export interface OneReading {
  /** Its place in the list of all observations. */
  readonly observation: number;
  /** Share of its own fitted value that it sets itself, 0 to 1. */
  readonly leverage: number;
  /** How far it is off what the others say, in standard deviations of that difference. */
  readonly off: number;
  /** Weighted sums of squares with it, and what linear theory leaves without it. */
  readonly whole: number;
  readonly without: number;
}

/** A reading must set this much of its own fitted value, and hold this much of the misfit, to rule a fit. */
const least = { leverage: 0.3, held: 0.5, points: 12 };

/**
 * The reading whose leaving out would change the fit most, if it holds more than half of the misfit and chance puts a reading so
 * far off the others once in a thousand fits (externally studentised residual, its limit divided over all readings: Cook &
 * Weisberg, Residuals and Influence in Regression, 1982, sections 2.2 and 2.2.2, from memory).
 * @param basis      orthonormal columns of the Jacobian, weighted, rows for observations and then for held facts
 * @param residuals  weighted, row by row
 * @param count      observations, the first rows
 * @param freedom    degrees of freedom
 */
export function oneReading(
  basis: readonly Float64Array[],
  residuals: Float64Array,
  count: number,
  freedom: number,
): OneReading | undefined {
  if (count < least.points || freedom < 2) return undefined;
  const whole = residuals.reduce((sum, r) => sum + r * r, 0);
  let found: OneReading | undefined;
  for (let i = 0; i < count; i++) {
    const leverage = basis.reduce((sum, column) => sum + column[i] * column[i], 0);
    const free = 1 - leverage;
    if (leverage < least.leverage || free < 1e-9) continue;
    const without = Math.max(0, whole - (residuals[i] * residuals[i]) / free);
    if (found && without >= found.without) continue;
    // Where nothing is left without it, rounding is: no finer than 1e-12 of the whole.
    const spread = Math.sqrt((Math.max(without, 1e-12 * whole) / (freedom - 1)) * free);
    found = { observation: i, leverage, off: Math.abs(residuals[i]) / spread, whole, without };
  }
  if (!found || found.without > least.held * whole) return undefined;
  return found.off > studentTQuantile(1 - 0.0005 / count, freedom - 1) ? found : undefined;
}
