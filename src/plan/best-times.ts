import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { informationOf, optimalSamples } from "../numerics/d-optimal.js";
import { asLogged, expectedOf } from "./expected.js";
import type { PlannedNoise } from "./noise.js";

/** So many times are looked at. */
const candidates = 160;

/**
 * Times at which as many samples as planned would tell all parameters best at one reading, the others as planned. Many of
 * them fall together: two samples half a step apart are as good as two at once.
 * @returns undefined where there is nothing to tell
 */
export function bestTimes(
  network: Network,
  trial: Trial,
  reading: number,
  times: readonly Float64Array[],
  origin: number,
  noise: readonly PlannedNoise[],
  curveAt: (times: readonly Float64Array[]) => readonly Float64Array[] | undefined,
  free: readonly string[] | undefined,
): { times: Float64Array; efficiency: number } | undefined {
  const own = times[reading];
  const after = own.filter((t) => t > 0);
  const stop = after[after.length - 1];
  const first = after[0];
  // Even in time at first, then in its logarithm: fronts and tails are both looked at closely.
  const many = Float64Array.from({ length: candidates }, (_, k) => {
    const share = (k + 0.5) / candidates;
    return 0.5 * first + (stop - 0.5 * first) * share ** 1.7;
  });
  const informationAt = (at: Float64Array) => {
    const all = times.map((t, i) => (i === reading ? at : t));
    const curves = curveAt(all);
    if (!curves) return undefined;
    const logged = asLogged(
      trial,
      all.map((t) => t.map((x) => x + origin)),
      curves,
    );
    const expected = expectedOf(network, logged, noise, free);
    if (!expected) return undefined;
    const from = all.slice(0, reading).reduce((n, t) => n + t.length, 0);
    return { ...expected, from };
  };
  const wide = informationAt(Float64Array.from([...own.filter((t) => t <= 0), ...many]));
  const planned = informationAt(own);
  if (!wide || !planned || wide.columns.length === 0) return undefined;
  const before = own.length - after.length;
  const free0 = wide.from + before;
  // Candidates first, then what is there in any case.
  const order = [...many.keys()].map((k) => free0 + k);
  const rest = [...wide.columns[0].keys()].filter((i) => i < free0 || i >= free0 + candidates);
  const columns = wide.columns.map((c) => Float64Array.from([...order, ...rest], (i) => c[i]));
  const told = columns.every((c) => c.some((v) => v !== 0));
  const count = Math.min(after.length, candidates);
  const best = told && count < candidates ? optimalSamples(columns, candidates, count) : undefined;
  if (!best || !Number.isFinite(best.information)) return undefined;
  const efficiency = Math.exp((informationOf(planned.columns) - best.information) / columns.length);
  return { times: Float64Array.from(best.chosen, (k) => many[k]), efficiency: Math.min(1, efficiency) };
}
