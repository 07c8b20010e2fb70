import type { Plant } from "../compile/plant.js";
import { integrate } from "../numerics/integrate.js";
import type { Conditions } from "./conditions.js";
import type { ExitAge } from "./exit-age.js";
import type { Kinetics } from "./kinetics.js";
import { settleMixed } from "./mixed.js";
import { type Premises, premisesOf } from "./premises.js";

/** What one curve allows: the outflow when mixing is as late or as early as the curve admits. */
export interface MixingBounds {
  /** Outlet concentrations under complete segregation, SI, by species. */
  readonly segregated: Float64Array;
  /** Under maximum mixedness. */
  readonly maximumMixedness: Float64Array;
  readonly premises: Premises;
}

const tolerance = { relative: 1e-11, absolute: 1e-14, maxSteps: 20_000 };

/**
 * Complete segregation and maximum mixedness for a whole chemistry at the mean composition of the feeds.
 * @param exit exit-age distribution of the outlet over all that is fed
 * @returns undefined where a law does not fade with its reactant (zero order), or an integration gave up
 */
export function mixingBounds(plant: Plant, conditions: Conditions, exit: ExitAge): MixingBounds | undefined {
  const { scale, reactions } = conditions;
  if (reactions.cell.endures) return undefined;
  const flow = plant.feeds.reduce((sum, feed) => sum + feed.flow, 0);
  const fed = scale.map(
    (s, i) => plant.feeds.reduce((sum, f, k) => sum + f.flow * conditions.feeds[k][i], 0) / flow / s,
  );
  const segregated = segregation(exit, reactions.tube, fed);
  const mixed = maximumMixedness(exit, reactions.tube, fed);
  if (!segregated || !mixed) return undefined;
  const toSi = (y: Float64Array): Float64Array => y.map((x, i) => x * scale[i]);
  return {
    segregated: toSi(segregated),
    maximumMixedness: toSi(mixed),
    premises: premisesOf(plant, conditions, fed, exit.horizon),
  };
}

/**
 * Where a prediction lies between the bounds: 0 at complete segregation, 1 at maximum mixedness. Undefined where the bounds
 * coincide (first order).
 */
export function positionBetween(segregated: number, network: number, maximumMixedness: number): number | undefined {
  const width = segregated - maximumMixedness;
  const size = Math.max(Math.abs(segregated), Math.abs(maximumMixedness));
  return Math.abs(width) > 1e-9 * size ? (segregated - network) / width : undefined;
}

/**
 * Every parcel is a batch for as long as it stays: integral of E(t) y_batch(t) dt, spikes added.
 * @see P.V. Danckwerts, Chem. Eng. Sci. 8 (1958) 93-102
 */
export function segregation(exit: ExitAge, kinetics: Kinetics, fed: Float64Array): Float64Array | undefined {
  const n = kinetics.size;
  const state = new Float64Array(2 * n);
  state.set(fed);
  const rhs = (t: number, s: Float64Array, ds: Float64Array): void => {
    kinetics.production(s, 0, ds, 0);
    const e = exit.density(t);
    for (let i = 0; i < n; i++) ds[n + i] = e * Math.max(s[i], 0);
  };
  const end = Math.max(exit.horizon, exit.spikes.at(-1)?.time ?? 0);
  const outputs = [...exit.spikes.map((s) => s.time), end];
  const run = integrate({ rhs, start: state, from: 0, to: end, outputs, stops: exit.breaks, ...tolerance });
  if (run.end !== "reached") return undefined;
  const last = run.states[run.states.length - 1];
  const rest = exit.washout(end);
  const total = Float64Array.from({ length: n }, (_, i) => last[n + i] + rest * Math.max(last[i], 0));
  exit.spikes.forEach(({ area }, k) => {
    for (let i = 0; i < n; i++) total[i] += area * Math.max(run.states[k][i], 0);
  });
  return total;
}

/**
 * All that will leave together mixes as soon as it can: dy/dl = -R(y) + (E/W)(y - y_in), followed from large life expectancy l
 * down to 0. At a spike of area a, y- = (W+ y+ + a y_in) / (W+ + a). It starts at the steady state of the last intensity, or at
 * y_in where E ends in a spike.
 * @see Th.N. Zwietering, Chem. Eng. Sci. 11 (1959) 1-15
 */
export function maximumMixedness(exit: ExitAge, kinetics: Kinetics, fed: Float64Array): Float64Array | undefined {
  const n = kinetics.size;
  const rhs = (l: number, y: Float64Array, dy: Float64Array): void => {
    kinetics.production(y, 0, dy, 0);
    const left = exit.washout(l);
    const intensity = left > 0 ? exit.density(l) / left : 0;
    for (let i = 0; i < n; i++) dy[i] = -dy[i] + intensity * (y[i] - fed[i]);
  };
  let from = startOf(exit);
  let y: Float64Array = fed.slice();
  if (!exit.spikes.some((s) => s.time >= from)) {
    const settled = settle(kinetics, fed, exit.density(from) / exit.washout(from));
    if (!settled) return undefined;
    y = settled;
  }
  const stops = exit.breaks.slice().reverse();
  for (const { time, area } of [...exit.spikes].reverse()) {
    if (time < from) {
      const run = integrate({ rhs, start: y, from, to: time, stops, ...tolerance });
      if (run.end !== "reached") return undefined;
      y = run.last;
    }
    const after = exit.washout(time);
    for (let i = 0; i < n; i++) y[i] = (after * y[i] + area * fed[i]) / (after + area);
    from = time;
  }
  if (from > 0) {
    const run = integrate({ rhs, start: y, from, to: 0, stops, ...tolerance });
    if (run.end !== "reached") return undefined;
    y = run.last;
  }
  return y.map((x) => Math.max(x, 0));
}

/** The largest life expectancy that still matters: that of the last spike, or where 1e-12 is left. */
function startOf(exit: ExitAge): number {
  const enough = 1e-12;
  const last = exit.spikes.at(-1)?.time ?? 0;
  if (exit.washout(last) <= enough) return last;
  let [low, high] = [last, exit.horizon];
  for (let k = 0; k < 200 && high - low > 1e-12 * high; k++) {
    const middle = (low + high) / 2;
    if (exit.washout(middle) > enough) low = middle;
    else high = middle;
  }
  return low;
}

/** The mixed state that a constant escape intensity (1/s) keeps up: R(y) + intensity (y_in - y) = 0. */
function settle(kinetics: Kinetics, fed: Float64Array, intensity: number): Float64Array | undefined {
  const y = fed.slice();
  return intensity > 0 && settleMixed(kinetics, fed, 1 / intensity, y) ? y : undefined;
}
