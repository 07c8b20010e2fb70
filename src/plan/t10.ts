import { weights } from "../data/weights.js";
import type { PlannedNoise } from "./noise.js";

/**
 * How well t10 would be read from the planned samples: noise of the points, carried through area and slope, and the
 * spacing of the samples there, even over a step.
 * @param value t10 of the vessel, s since the injection
 */
export function t10Error(
  time: Float64Array,
  curve: Float64Array,
  noise: PlannedNoise,
  isPulse: boolean,
  value: number,
): { value: number; sd: number; spacing: number } | undefined {
  const next = time.findIndex((t) => t >= value);
  if (next < 1) return undefined;
  const spacing = time[next] - time[next - 1];
  const blur = spacing / Math.sqrt(12) / 2;
  if (!isPulse) {
    const end = curve[curve.length - 1];
    const slope = (curve[next] - curve[next - 1]) / spacing;
    if (!(slope > 0) || !(end > 0)) return undefined;
    return { value, sd: Math.hypot(noise.sd(curve[next]) / Math.SQRT2 / slope, blur), spacing };
  }
  const after = time.findIndex((t) => t >= 0);
  const w = weights(time.subarray(after), "trapezoid");
  let area = 0;
  for (let i = 0; i < w.length; i++) area += w[i] * curve[i + after];
  const density = (curve[next] + curve[next - 1]) / 2 / area;
  if (!(density > 0)) return undefined;
  let variance = 0;
  for (let i = 0; i < w.length; i++) {
    const share = (time[i + after] <= value ? 1 : 0) - 0.1;
    variance += ((w[i] * share * noise.sd(curve[i + after])) / area) ** 2;
  }
  return { value, sd: Math.hypot(Math.sqrt(variance) / density, blur), spacing };
}
