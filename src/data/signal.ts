import { extent } from "./extent.js";

/**
 * Is there anything to read? False where every point is the same but for rounding; noise alone is no reason to refuse,
 * since a known dose that leaves no mark says something too.
 * @param y values in any unit
 */
export function hasSignal(y: Float64Array): boolean {
  const [low, high] = extent(y);
  return high - low > 1e-12 * Math.max(Math.abs(low), Math.abs(high));
}
