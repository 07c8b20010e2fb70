import type { Estimates } from "./estimates.js";
import type { Problem } from "./problem.js";
import { profileOf } from "./profile.js";
import type { FittedProfile } from "./result.js";
import { closely, descend, type Watch } from "./search.js";
import type { Settled } from "./settle.js";

/**
 * Profiles of all parameters with their 95 % intervals. Where residuals hang together the rise counts as much less as they vary
 * more along the change of the curve, which in the linear case is what widens the linear interval. What uncertain constants bring is added to each side in quadrature.
 */
export function profilesOf(settled: Settled, estimates: Estimates, watch: Watch): FittedProfile[] {
  const { x, problem } = settled;
  const { t, variance, ways, carried, along } = estimates;
  const limit = t ** 2;
  if (!(variance > 0) || !Number.isFinite(limit)) return [];
  return problem.setup.coordinates.flatMap((c, j): FittedProfile[] => {
    const range = Number.isFinite(c.to - c.from) ? (c.to - c.from) / 20 : Math.abs(x[j]) / 10 || 0.1;
    const { error } = ways[j];
    const step = Number.isFinite(error) && error > 0 ? Math.min(error, 4 * range) : range;
    const profile = profileOf(settled, j, { variance, limit, step, along }, watch);
    const value = c.toSi(x[j]);
    const end = (k: 0 | 1): number | undefined => {
      const at = c.toSi(profile.interval[k]);
      const whole = value + Math.sign(at - value || 2 * k - 1) * Math.hypot(at - value, t * carried[j]);
      return profile.ends[k] === "open" ? undefined : Math.min(c.upper, Math.max(c.lower, whole));
    };
    return [
      {
        name: c.name,
        unit: c.unit,
        value: profile.at.map((u) => c.toSi(u)),
        deviation: profile.at.map((u, i) => Math.sign(u - x[j]) * Math.sqrt(profile.rise[i])),
        interval95: [end(0), end(1)],
        ends: profile.ends,
      },
    ];
  });
}

/** A parameter whose linear interval does not hold. */
export interface NotLinear {
  readonly name: string;
  /** Rise of the sum of squares at an end of the linear interval, the others at their best, over what it should be. */
  readonly times: number;
  /** Where the sum of squares was found to be less than at the optimum. */
  readonly better: Float64Array | undefined;
}

/** Off by so much in the rise, an interval is off by about a quarter. */
const tolerated = 1.5;
/** A fall by so much of the rise that was expected is another optimum. */
const missed = 1e-3;

/**
 * Looks at the ends of the linear intervals: there the sum of squares, all others at their best, should have risen by t^2 times
 * the residual variance. Cheap: most are settled by where linear theory puts the others.
 * @param problem  the fit's own, or one that stands for it near its end
 * @see D.M. Bates, D.G. Watts, J. R. Statist. Soc. B 42 (1980) 1-25, for what makes it fail
 */
export function notLinear(
  problem: Problem,
  x: Float64Array,
  { t, variance, ways }: Estimates,
  watch: Watch,
): NotLinear[] {
  const { coordinates } = problem.setup;
  const least = problem.evaluate(x)?.ofAll ?? Number.NaN;
  return coordinates.flatMap((c, j): NotLinear[] => {
    const { along, error } = ways[j];
    if (!Number.isFinite(error) || !(error > 0) || !along.every(Number.isFinite)) return [];
    const ends = [-1, 1].flatMap((side): { point: Float64Array; times: number }[] => {
      const point = x.map((u, i) => u + side * t * error * along[i]);
      const inside = coordinates.every((d, i) => point[i] >= d.from && point[i] <= d.to);
      const there = inside ? problem.evaluate(point) : undefined;
      return there ? [{ point, times: (there.ofAll - least) / (t * t * variance) }] : [];
    });
    const off = (times: number): number => Math.max(times, 1 / Math.max(times, 1e-9));
    const [worst] = ends.sort((a, b) => off(b.times) - off(a.times));
    if (!worst || off(worst.times) <= tolerated) return [];
    const { sum, x: end } = descend(problem, worst.point, closely, watch, j);
    const times = (sum - least) / (t * t * variance);
    return off(times) > tolerated ? [{ name: c.name, times, better: times < -missed ? end : undefined }] : [];
  });
}
