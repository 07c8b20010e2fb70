/** What tells rivals apart. */
export interface Criteria {
  readonly aicc: number;
  /** With an autoregression of the residuals, where they hang together. */
  readonly aiccCorrelated?: number;
  readonly bic: number;
}

/** What the residuals' hanging together changes. */
export interface Correlation {
  /** Twice the log-likelihood that it adds. */
  readonly gain: number;
  /** Correlation times found. */
  readonly times: number;
  /** Independent readings that would tell as much. */
  readonly effective: number;
}

/**
 * Corrected Akaike and Bayesian information criteria of a least-squares fit: n ln(RSS / n) + sum ln sigma^2 + penalty, without
 * the constants that all rivals share (Burnham & Anderson, Model Selection and Multimodel Inference, 2nd ed. 2002, sections 2.2 and 2.4;
 * Schwarz, Ann. Statist. 6 (1978) 461-464).
 * @param unknowns      free parameters with linear terms
 * @param variances     estimated variances, at least 1; each counts as an unknown
 * @param logVariances  sum of ln sigma^2 that the weights carry, 0 for equal ones
 * @param correlation   of residuals that hang together: AICc is given with and without it, BIC with it and by the effective
 *                       number of readings
 * @returns aicc Infinity where there are too few points for the correction
 */
export function criteriaOf(
  rss: number,
  n: number,
  unknowns: number,
  variances: number,
  logVariances: number,
  correlation?: Correlation,
): Criteria {
  const deviance = n * Math.log(rss / n) + logVariances;
  const aicc = (k: number, of: number): number => {
    const left = n - k - 1;
    return left > 0 ? of + 2 * k + (2 * k * (k + 1)) / left : Number.POSITIVE_INFINITY;
  };
  const k = unknowns + variances;
  if (!correlation) return { aicc: aicc(k, deviance), bic: deviance + k * Math.log(n) };
  const { gain, times, effective } = correlation;
  return {
    aicc: aicc(k, deviance),
    aiccCorrelated: aicc(k + times, deviance - gain),
    bic: deviance - gain + (k + times) * Math.log(effective),
  };
}
