import type { CleanCurve } from "./clean.js";
import { inflation } from "./persistence.js";
import type { Response } from "./response.js";

/** Error of what is still to come at each point, from the noise of the points after and before it and what lies between them. */
export function washoutError(
  { is, sd, weight, value, sampling, ends }: Response,
  area: number,
  { noise }: CleanCurve,
): Float64Array {
  if (is === "washout")
    return ends ? sd.map((s, i) => Math.hypot(s, (1 - value[i]) * ends.last, value[i] * ends.first)) : sd;
  const grow = inflation(noise.persistence.lag1);
  const n = value.length;
  // What lies between two points is before the later one.
  const part = sd.map((s, i) => grow * (weight[i] * s) ** 2 + (i > 0 ? sampling.unsure[i - 1] ** 2 : 0));
  const total = part.reduce((sum, v) => sum + v, 0);
  let before = 0;
  let seen = 0;
  return Float64Array.from({ length: n }, (_, i) => {
    before += part[i];
    seen += weight[i] * value[i];
    const F = Math.min(1, Math.max(0, seen / area));
    // The area's own error moves both sides of the point.
    return Math.sqrt((1 - F) ** 2 * before + F ** 2 * (total - before)) / area;
  });
}
