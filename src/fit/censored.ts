import { normalCdf } from "../numerics/distributions.js";

/** A censored reading as one that a least-squares step can use. */
export interface Stand {
  /** The value that stands for it, SI. */
  readonly value: number;
  /** Its share of the information of a reading that was seen, 0 to 1. */
  readonly information: number;
}

/**
 * The working value and weight of a reading of which only a limit is known, by the slope and the curvature of the
 * logarithm of its probability under normal noise: repeated least squares with them end where the censored likelihood is
 * greatest, and their weights are its information (J. Tobin, Econometrica 26 (1958) 24-36; working values as in P. J. Green,
 * J. R. Statist. Soc. B 46 (1984) 149-192).
 * @param side   -1: at or below the limit; 1: at or above
 * @param fitted what the model gives there
 */
export function standFor(side: number, limit: number, fitted: number, sigma: number): Stand {
  const z = (side < 0 ? limit - fitted : fitted - limit) / sigma;
  if (z > 8) return { value: fitted, information: 0 };
  const hazard = hazardAt(z);
  const information = Math.min(1, Math.max(hazard * (hazard + z), 1e-12));
  const step = (sigma * hazard) / information;
  return { value: side < 0 ? fitted - step : fitted + step, information };
}

/** phi(z) / Phi(z); far below, by its continued fraction. */
function hazardAt(z: number): number {
  if (z > -6) return Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI) / normalCdf(z);
  const x = -z;
  return x + 1 / (x + 2 / (x + 3 / (x + 4 / (x + 5 / (x + 6 / x)))));
}
