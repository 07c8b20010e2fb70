import { exact } from "../simulate/exact.js";
import type { TracerEngine } from "../simulate/linear-system.js";
import { ode } from "../simulate/ode.js";

/** The engine by its name; `auto` is the exact one, which every network of this version allows. */
export const engineNamed = (name: string): TracerEngine => (name === "ode" ? ode : exact);

/** Both engines of this version, to check one by the other. */
export const engines: readonly [TracerEngine, TracerEngine] = [exact, ode];

/** Largest difference between two sets of curves, as a fraction of the largest value of the first. */
export function largestDifference(a: readonly Float64Array[], b: readonly Float64Array[]): number {
  let peak = 0;
  let most = 0;
  a.forEach((curve, i) => {
    for (let k = 0; k < curve.length; k++) {
      peak = Math.max(peak, Math.abs(curve[k]));
      const difference = Math.abs(curve[k] - b[i][k]);
      // A point that one engine does not have is no agreement.
      most = Number.isNaN(difference) ? Number.POSITIVE_INFINITY : Math.max(most, difference);
    }
  });
  return most === 0 ? 0 : most / peak;
}
