import { normalCdf } from "../numerics/distributions.js";
import type { FittedReading } from "./result.js";

/** Patterns that the residuals of one reading show, in the order of time. */
export interface Patterns {
  readonly key: string;
  /** Stretches of one sign, and how many chance gives. */
  readonly runs: number;
  readonly expectedRuns: number;
  /** Probability of so few runs or fewer by chance. */
  readonly p: number;
  /** Correlation of neighbours. */
  readonly lag1: number;
}

/**
 * Runs test and neighbour correlation of the residuals of each reading.
 * @see A. Wald, J. Wolfowitz, Ann. Math. Statist. 11 (1940) 147-162
 */
export const patternsOf = (readings: readonly FittedReading[]): Patterns[] =>
  readings.map(({ key, residual, weight }) => {
    const weighted = residual.map((e, i) => e * weight[i]);
    const [plus, minus] = [weighted.filter((e) => e > 0).length, weighted.filter((e) => e < 0).length];
    const signs = Array.from(weighted, Math.sign).filter((s) => s !== 0);
    const runs = signs.filter((s, i) => i === 0 || s !== signs[i - 1]).length;
    const n = plus + minus;
    const expectedRuns = n > 0 ? 1 + (2 * plus * minus) / n : 0;
    const variance = n > 1 ? (2 * plus * minus * (2 * plus * minus - n)) / (n * n * (n - 1)) : 0;
    let [square, product] = [0, 0];
    for (let i = 0; i < weighted.length; i++) {
      square += weighted[i] ** 2;
      if (i > 0) product += weighted[i] * weighted[i - 1];
    }
    // Half a run for the step from whole numbers to a normal distribution.
    const z = variance > 0 ? (runs + 0.5 - expectedRuns) / Math.sqrt(variance) : 0;
    return { key, runs, expectedRuns, p: normalCdf(z), lag1: square > 0 ? product / square : 0 };
  });
