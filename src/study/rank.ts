import type { Fit } from "../fit/result.js";

/** Where a rival stands beside the others. */
export interface Standing {
  /** AICc that rivals are compared by. */
  readonly criterion: number;
  /** The same above that of the best. */
  readonly difference: number;
  /** Akaike weight: how the evidence divides over the rivals tried. */
  readonly weight: number;
}

/**
 * Akaike weights from AICc. Where the residuals of the best hang together, so do the errors of these readings, and every rival
 * is taken with the better of both kinds of error: independent ones would count the same evidence many times over. A rival
 * without a fit, or whose fit was cut short, has no weight.
 * @see K. P. Burnham & D. R. Anderson, Model Selection and Multimodel Inference, 2nd ed., Springer (2002), section 2.9
 */
export function standings(fits: readonly (Fit | undefined)[]): Standing[] {
  const counts = (f: Fit | undefined): f is Fit => f !== undefined && !f.stopped && Number.isFinite(f.aicc);
  const first = fits.filter(counts).reduce((a: Fit | undefined, f) => (a && a.aicc <= f.aicc ? a : f), undefined);
  const hanging = first?.aiccCorrelated !== undefined;
  const criteria = fits.map((f) =>
    !counts(f) ? Number.POSITIVE_INFINITY : hanging ? Math.min(f.aicc, f.aiccCorrelated ?? f.aicc) : f.aicc,
  );
  const best = Math.min(...criteria);
  const raw = criteria.map((c) => (Number.isFinite(c) ? Math.exp(-(c - best) / 2) : 0));
  const sum = raw.reduce((s, w) => s + w, 0);
  return criteria.map((criterion, i) => ({
    criterion,
    difference: Number.isFinite(criterion) ? criterion - best : Number.POSITIVE_INFINITY,
    weight: sum > 0 ? raw[i] / sum : 0,
  }));
}

/** Where nothing was tested every rival counts alike, and nothing is compared. */
export const untestedStanding = (rivals: number): Standing => ({
  criterion: Number.POSITIVE_INFINITY,
  difference: 0,
  weight: 1 / rivals,
});

/** A rival that the data leave standing: its weight is above 5 % (Burnham & Anderson average over such; common practice). */
export const survives = (standing: Standing): boolean => standing.weight > 0.05;
