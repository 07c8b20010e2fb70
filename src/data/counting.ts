import type { Reading } from "../model/trial.js";

/**
 * Variance (SI) that counting alone gives a concentration: counts are Poisson, and a detector that is blind for d after
 * each count loses more the faster they come: Var n = n (1 + n d) / T for the corrected rate n, far from saturation
 * (J. W. Müller, Nucl. Instr. Meth. 112 (1973) 47-57, from memory). Never below that of one count.
 * @returns undefined where the reading declares no counting
 */
export function countingVariance({
  noise,
  calibration,
}: Pick<Reading, "noise" | "calibration">): ((c: number) => number) | undefined {
  const counting = noise?.counting;
  if (!counting) return undefined;
  const { over, deadTime } = counting;
  return (c) => {
    const rate = Math.max(calibration ? calibration.raw(c) : c, 1 / over);
    const slope = calibration ? calibration.slope(rate) : 1;
    return (slope * slope * rate * (1 + rate * deadTime)) / over;
  };
}
