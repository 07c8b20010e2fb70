import { lowDiscrepancy } from "../numerics/low-discrepancy.js";
import { factsAt, type Setup, valuesOf } from "./setup.js";

/** How many starts, and from which seed. */
export interface StartPlan {
  /** Starts besides the file's own values; undefined: chosen from the number of parameters and the sampling gaps of tubes. */
  readonly others: number | undefined;
  readonly seed: number;
}

/** One walk through the range of a parameter that sets the delay of a tube: one value in every sampling gap. */
export interface DelayWalk {
  /** Index of the coordinate. */
  readonly index: number;
  /** u of the coordinate, ascending. */
  readonly at: Float64Array;
  /** What moves the front by one sampling gap, or by one step of the walk where that is more; u. */
  readonly gap: number;
}

/** Most steps of one walk: with denser sampling than this the front is seen in many samples and the steps smooth out. */
const mostSteps = 40;

/**
 * Where tubes put their front between two samples: the sum of squares is flat there and jumps as the front crosses a sample, so
 * a search must begin once in every gap. For each delay the parameter that moves it most, there and then, is walked at start
 * values of the others.
 */
export function delayWalks(setup: Setup, from: Float64Array): DelayWalk[] {
  const n = setup.coordinates.length;
  const ranges = setup.coordinates.map((c, j) => [
    delays(setup, from, j, c.draw[0]),
    delays(setup, from, j, c.draw[1]),
  ]);
  const beside = setup.coordinates.map(({ draw: [a, b] }, j) =>
    [-1, 1].map((side) => delays(setup, from, j, Math.min(b, Math.max(a, from[j] + 0.02 * side * (b - a))))),
  );
  const count = Math.max(0, ...ranges.flat().map((d) => d.length));
  const gap = typicalGap(setup);
  const chosen = new Map<number, number>();
  for (let d = 0; d < count; d++) {
    const moved = ([low, high]: number[][]): number => Math.abs((high[d] ?? 0) - (low[d] ?? 0));
    const able = Array.from({ length: n }, (_, j) => j).filter((j) => {
      const most = moved(ranges[j]);
      return Number.isFinite(most) && most > gap;
    });
    const [best] = able.sort((i, j) => moved(beside[j]) - moved(beside[i]));
    if (best !== undefined) chosen.set(best, Math.max(chosen.get(best) ?? 0, moved(ranges[best])));
  }
  return [...chosen].map(([index, moved]) => {
    const steps = Math.min(mostSteps, Math.ceil(moved / gap));
    const [a, b] = setup.coordinates[index].draw;
    const at = Float64Array.from({ length: steps }, (_, k) => a + ((k + 0.5) / steps) * (b - a));
    return { index, at, gap: steps > 1 ? (b - a) / steps : 0 };
  });
}

/** How many starts of each sort a plan means. */
export interface StartCounts {
  readonly walked: number;
  readonly drawn: number;
}

/**
 * Steps of the delay walks and points of the low-discrepancy sequence. A plan with too few for every sampling gap gives half of
 * them to the walks.
 */
export function startCounts(setup: Setup, steps: number, plan: StartPlan): StartCounts {
  const n = setup.coordinates.length;
  if (plan.others === undefined) return { walked: steps, drawn: 4 + (steps > 0 ? 2 : 4) * n };
  const walked = Math.min(steps, Math.ceil(plan.others / 2));
  return { walked, drawn: plan.others - walked };
}

/** `count` steps, evenly picked, of the delay walks about a point. */
export function walkStarts(walks: readonly DelayWalk[], about: Float64Array, count: number): Float64Array[] {
  const all = walks.flatMap((w) => [...w.at].map((u) => withCoordinate(about, w.index, u)));
  return Array.from({ length: count }, (_, k) => all[Math.floor(((k + 0.5) * all.length) / count)]);
}

/**
 * Starts inside the bounds from a low-discrepancy sequence.
 * @param allowed  whether a point makes a vessel; points that do not are passed over
 * @returns fewer than `count` where hardly any point makes a vessel
 */
export function drawnStarts(
  setup: Setup,
  count: number,
  seed: number,
  allowed: (x: Float64Array) => boolean,
  cancelled: () => boolean,
): Float64Array[] {
  const next = lowDiscrepancy(setup.coordinates.length, seed);
  const starts: Float64Array[] = [];
  for (let tries = 0; starts.length < count && tries < 50 * count && !cancelled(); tries++) {
    const point = next();
    const x = Float64Array.from(setup.coordinates, (c, j) => c.draw[0] + point[j] * (c.draw[1] - c.draw[0]));
    if (allowed(x)) starts.push(x);
  }
  return starts;
}

export function withCoordinate(x: Float64Array, j: number, u: number): Float64Array {
  const moved = Float64Array.from(x);
  moved[j] = u;
  return moved;
}

/** Delays of all trials with one coordinate set to `u`; tries a little inside where the very bound makes no vessel. */
function delays(setup: Setup, from: Float64Array, j: number, u: number): number[] {
  for (const share of [0, 0.02, 0.1, 0.3]) {
    const facts = factsAt(setup, withCoordinate(from, j, u + share * (from[j] - u)));
    const all = facts.trials.flatMap((trial, k) => [...setup.model.delays(trial, valuesOf(setup, facts, k))]);
    if (all.length > 0 && all.every(Number.isFinite)) return all;
  }
  return [];
}

/** Median time between neighbouring samples, the shortest of all blocks, s. */
function typicalGap(setup: Setup): number {
  const gaps = setup.blocks.map((b) => {
    const t = Float64Array.from(b.time).sort();
    const between = t
      .subarray(1)
      .map((v, i) => v - t[i])
      .filter((d) => d > 0)
      .sort();
    return between.length > 0 ? between[between.length >> 1] : Number.POSITIVE_INFINITY;
  });
  return Math.min(...gaps);
}
