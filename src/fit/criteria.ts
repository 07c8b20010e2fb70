/** What tells rivals apart. */
export interface Criteria {
  readonly aicc: number;
  readonly bic: number;
}

/**
 * Corrected Akaike and Bayesian information criteria of a least-squares fit: n ln(RSS / n) + sum ln sigma^2 + penalty, without
 * the constants that all rivals share (Burnham & Anderson, Model Selection and Multimodel Inference, 2nd ed. 2002, sections 2.2 and 2.4;
 * Schwarz, Ann. Statist. 6 (1978) 461-464).
 * @param unknowns      free parameters with linear terms
 * @param variances     estimated variances, at least 1; each counts as an unknown
 * @param logVariances  sum of ln sigma^2 that the weights carry, 0 for equal ones
 * @returns aicc Infinity where there are too few points for the correction
 */
export function criteriaOf(
  rss: number,
  n: number,
  unknowns: number,
  variances: number,
  logVariances: number,
): Criteria {
  const k = unknowns + variances;
  const deviance = n * Math.log(rss / n) + logVariances;
  const left = n - k - 1;
  return {
    aicc: left > 0 ? deviance + 2 * k + (2 * k * (k + 1)) / left : Number.POSITIVE_INFINITY,
    bic: deviance + k * Math.log(n),
  };
}
