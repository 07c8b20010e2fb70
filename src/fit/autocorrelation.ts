import type { Block } from "./observations.js";

/** How far the residuals hang together. */
export interface Autocorrelation {
  /** Lag-1 correlation of neighbours in time, over all readings. */
  readonly lag1: number;
  /** lag1 in standard deviations of what independent residuals give, sqrt(n) lag1. */
  readonly deviations: number;
  readonly significant: boolean;
  /** n (1 - lag1) / (1 + lag1) where significant, else n. */
  readonly effective: number;
  /** What standard errors grow by: sqrt((1 + lag1) / (1 - lag1)), 1 where not significant. */
  readonly widening: number;
}

/**
 * Lag-1 autocorrelation of weighted residuals within each reading, neighbours in time, and the effective sample size of a
 * first-order autoregression (Bayley & Hammersley, Suppl. J. R. Statist. Soc. 8 (1946) 184-197). Only a positive correlation beyond
 * two standard deviations counts.
 * @param residuals  one per observation, any common scale
 */
export function autocorrelationOf(blocks: readonly Block[], residuals: Float64Array): Autocorrelation {
  let square = 0;
  let product = 0;
  let n = 0;
  for (const b of blocks) {
    const order = [...b.time.keys()].filter((i) => !b.censored?.[i]).sort((i, j) => b.time[i] - b.time[j]);
    for (let k = 0; k < order.length; k++) {
      const e = residuals[b.from + order[k]];
      square += e * e;
      if (k > 0) product += e * residuals[b.from + order[k - 1]];
    }
    n += order.length;
  }
  const lag1 = square > 0 ? Math.min(product / square, 0.999) : 0;
  const deviations = Math.sqrt(n) * lag1;
  const significant = deviations > 2;
  const shrink = significant ? (1 - lag1) / (1 + lag1) : 1;
  return { lag1, deviations, significant, effective: n * shrink, widening: 1 / Math.sqrt(shrink) };
}
