import type { Smooth } from "./smooth.js";
import { slopeWeights } from "./smooth.js";

/** How a sampled curve is integrated. */
export type Rule = "cubic" | "trapezoid" | "simpson";

/**
 * Weights w with integral = sum w_i y_i over the points t (rising, any spacing; equal times are allowed). Same unit as t.
 * @param smooth the intervals over which `cubic` may bend; where left out it draws lines
 */
export function weights(t: Float64Array, rule: Rule, smooth?: Smooth): Float64Array {
  const w = new Float64Array(t.length);
  if (rule === "simpson" && t.length >= 3) simpson(t, w);
  else trapezoid(t, w, 0, t.length - 1);
  if (rule === "cubic" && smooth) bend(t, w, smooth);
  return w;
}

/** What cubics with the slopes of `slopeWeights` hold beside lines: h^2 / 12 times the fall of the slope over each interval. */
function bend(t: Float64Array, w: Float64Array, smooth: Smooth): void {
  for (let i = 0; i + 1 < t.length; i++) {
    if (!smooth[i]) continue;
    const part = (t[i + 1] - t[i]) ** 2 / 12;
    for (const [sign, at] of [
      [1, i],
      [-1, i + 1],
    ])
      slopeWeights(t, smooth, at, (k, by) => {
        w[k] += sign * part * by;
      });
  }
}

function trapezoid(t: Float64Array, w: Float64Array, from: number, to: number): void {
  for (let i = from; i < to; i++) {
    const half = (t[i + 1] - t[i]) / 2;
    w[i] += half;
    w[i + 1] += half;
  }
}

/**
 * Composite Simpson's rule for any spacing: a parabola through each three points; with an even number of points the
 * last interval takes the parabola through the last three (K. V. Cartwright, Journal of Mathematical Sciences and
 * Mathematics Education 11 (2017) 34-42, from memory). Equal times fall back to the trapezoid.
 */
function simpson(t: Float64Array, w: Float64Array): void {
  const last = t.length - 1;
  const paired = last % 2 === 0 ? last : last - 1;
  for (let i = 0; i + 2 <= paired; i += 2) {
    const a = t[i + 1] - t[i];
    const b = t[i + 2] - t[i + 1];
    if (a === 0 || b === 0) {
      trapezoid(t, w, i, i + 2);
      continue;
    }
    const sixth = (a + b) / 6;
    w[i] += sixth * (2 - b / a);
    w[i + 1] += (sixth * (a + b) ** 2) / (a * b);
    w[i + 2] += sixth * (2 - a / b);
  }
  if (paired === last) return;
  const a = t[last - 1] - t[last - 2];
  const b = t[last] - t[last - 1];
  if (a === 0 || b === 0) {
    trapezoid(t, w, last - 1, last);
    return;
  }
  w[last] += (2 * b * b + 3 * a * b) / (6 * (a + b));
  w[last - 1] += (b * b + 3 * a * b) / (6 * a);
  w[last - 2] -= b ** 3 / (6 * a * (a + b));
}
