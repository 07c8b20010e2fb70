import { countingVariance } from "../data/counting.js";
import type { Reading } from "../model/trial.js";

/** How far a planned reading would be off. */
export interface PlannedNoise {
  /** One standard deviation at a concentration, SI. */
  readonly sd: (c: number) => number;
  /** The part that does not fall with the concentration, SI. */
  readonly floor: number;
  /** True where the draft declares none and 1 % of the peak was taken. */
  readonly assumed: boolean;
}

/** @param peak highest concentration expected, SI */
export function plannedNoise(reading: Reading, peak: number): PlannedNoise {
  const { noise } = reading;
  if (!noise) return { sd: () => 0.01 * peak, floor: 0.01 * peak, assumed: true };
  const counts = countingVariance(reading);
  const base = noise.floor?.of([]) ?? 0;
  const sd = (c: number): number =>
    Math.max(Math.sqrt(base ** 2 + ((noise.relative ?? 0) * c) ** 2 + (counts?.(c) ?? 0)), 1e-6 * peak);
  return { sd, floor: Math.sqrt(base ** 2 + (counts?.(0) ?? 0)), assumed: false };
}
