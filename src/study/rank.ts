import type { Fit } from "../fit/result.js";

/** Where a rival stands beside the others. */
export interface Standing {
  /** AICc above that of the best. */
  readonly difference: number;
  /** Akaike weight: how the evidence divides over the rivals tried. */
  readonly weight: number;
}

/**
 * Akaike weights from AICc. A rival without a fit, or whose fit was cut short, has none.
 * @see K. P. Burnham & D. R. Anderson, Model Selection and Multimodel Inference, 2nd ed., Springer (2002), section 2.9
 */
export function standings(fits: readonly (Fit | undefined)[]): Standing[] {
  const counts = (f: Fit | undefined): f is Fit => f !== undefined && !f.stopped && Number.isFinite(f.aicc);
  const best = Math.min(...fits.map((f) => (counts(f) ? f.aicc : Number.POSITIVE_INFINITY)));
  const raw = fits.map((f) => (counts(f) ? Math.exp(-(f.aicc - best) / 2) : 0));
  const sum = raw.reduce((s, w) => s + w, 0);
  return fits.map((f, i) => ({
    difference: counts(f) ? f.aicc - best : Number.POSITIVE_INFINITY,
    weight: sum > 0 ? raw[i] / sum : 0,
  }));
}

/** A rival that the data leave standing: its weight is above 5 % (Burnham & Anderson average over such; common practice). */
export const survives = (standing: Standing): boolean => standing.weight > 0.05;
