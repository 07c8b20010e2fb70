import type { Noisy } from "./standard-curve.js";
import { thresholds } from "./thresholds.js";

const limit = thresholds.across;

/** `differ`: by more than noise and sampling; `coincide`: within the margin for sure; `open`: neither. */
export type Verdict = "differ" | "coincide" | "open";

/**
 * Holds a figure of two tests under the same conditions against each other. They differ where nothing that is declared explains it, and by
 * more than the margin; they coincide where the noise of their curves surely (95 %) leaves less than the margin between them.
 * @param a, b     of one unit, SI
 * @see two one-sided tests: D. J. Schuirmann, J. Pharmacokinet. Biopharm. 15 (1987) 657-680 (from memory)
 */
export function heldAgainst(a: Noisy, b: Noisy): Verdict {
  const apart = Math.abs(a.value - b.value);
  const margin = limit.volume * Math.max(Math.abs(a.value), Math.abs(b.value));
  if (apart > margin && apart > limit.sure * Math.hypot(a.whole, b.whole)) return "differ";
  return apart + 1.645 * Math.hypot(a.noise, b.noise) < margin ? "coincide" : "open";
}

/** Of several verdicts on one pair. */
export const together = (verdicts: readonly Verdict[]): Verdict =>
  verdicts.includes("differ") ? "differ" : verdicts.includes("open") ? "open" : "coincide";
