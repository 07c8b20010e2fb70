import type { Distribution } from "./distribution.js";
import type { ReadCurve } from "./result.js";
import { thresholds } from "./thresholds.js";

/** All functions of age that follow from E and F (P. Naor, R. Shinnar, Ind. Eng. Chem. Fundam. 2 (1963) 278-286, from memory). */
export function agesOf({ time, E, F }: Distribution, error: Float64Array, mean: number | undefined): ReadCurve {
  const W = F.map((f) => 1 - f);
  return {
    time,
    E,
    F,
    error,
    I: mean !== undefined && mean > 0 ? W.map((w) => w / mean) : undefined,
    L: E.map((e, i) => (W[i] > thresholds.washoutLeast * error[i] && W[i] > 0 ? e / W[i] : Number.NaN)),
  };
}

/** Errors of F that the stretch its slope is taken over must rise by. */
const steep = 6;

/**
 * One standard error of the time at which a share has come: that of F there, over E.
 * @param error  of F at the points, by their noise
 * @param unsure what else leaves the area open, as a share of it
 */
export function percentileError(
  F: Distribution,
  error: Float64Array,
  at: number | undefined,
  unsure: number,
): number | undefined {
  if (at === undefined) return undefined;
  const i = F.time.findIndex((t) => t >= at);
  if (i < 1) return undefined;
  const own = Math.hypot((error[i] + error[i - 1]) / 2, unsure * F.F[i]);
  // The slope over so much of the curve that noise does not make it.
  let [a, b] = [i - 1, i];
  while ((a > 0 || b + 1 < F.time.length) && F.F[b] - F.F[a] < steep * own)
    [a, b] = [Math.max(0, a - 1), Math.min(F.time.length - 1, b + 1)];
  const density = (F.F[b] - F.F[a]) / (F.time[b] - F.time[a]);
  return density > 0 ? own / density : undefined;
}
