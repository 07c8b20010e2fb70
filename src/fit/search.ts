import { leastSquares } from "../numerics/least-squares.js";
import { projectedJacobian } from "./jacobian.js";
import type { Problem } from "./problem.js";
import { delayWalks, drawnStarts, type StartPlan, startCounts, walkStarts, withCoordinate } from "./starts.js";

/** What watches a search, and may end it. */
export interface Watch {
  cancelled(): boolean;
  progress(at: { start: number; starts: number; best: number; evaluations: number }): void;
}

/** Where one descent ended. */
export interface Optimum {
  readonly x: Float64Array;
  /** Sum of squares with priors. */
  readonly sum: number;
  readonly converged: boolean;
  /** Starts that ended here. */
  readonly reached: number;
}

export interface SearchResult {
  readonly best: Optimum | undefined;
  /** Distinct ends of the polished descents, best first; `best` is the first. */
  readonly optima: readonly Optimum[];
  readonly cancelled: boolean;
  /** A problem of fewer points that stands for another near the best. */
  readonly close?: { readonly problem: Problem; readonly standsFor: Problem } | undefined;
}

/**
 * Ends of rough descents that are worth a closer one: so many at most, the first so many in any case, the others as far as their
 * sum of squares is within this factor of the least.
 */
const closer = 4;
const always = 2;
/** Starts of one sort are taken in the order of their sums of squares, until so many have ended at the best end known before. */
const enough = 3;
const near = 10;

/**
 * The best of many descents: a rough one from the file's values, then from every sampling gap of the tubes about its end (what
 * else the data fix is in place by then) and from points drawn inside the bounds; a closer one from the best ends that differ;
 * hops of one sampling gap to both sides along the delays for as long as that finds better; a full one from the best.
 */
export function searchFrom(problem: Problem, file: Float64Array, plan: StartPlan, watch: Watch): SearchResult {
  const { setup } = problem;
  const allowed = (x: Float64Array): boolean => problem.evaluate(x) !== undefined;
  const rough: Optimum[] = [];
  let planned = 1 + (plan.others ?? 0);
  const descendFrom = (starts: readonly Float64Array[]): void => {
    let again = 0;
    for (const start of starts) {
      if ((watch.cancelled() && rough.length > 0) || again === enough) return;
      const end = descend(problem, start, roughly, watch);
      const least = rough.reduce((best: Optimum | undefined, r) => (best && best.sum <= r.sum ? best : r), undefined);
      if (least && samePlace(least, end, 1e-3)) again++;
      rough.push(end);
      const best = Math.min(...rough.map((r) => r.sum));
      watch.progress({ start: rough.length, starts: planned, best, evaluations: setup.cost.evaluations });
    }
  };
  if (allowed(file)) descendFrom([file]);
  // What ran into a bound went astray with the front in the wrong place: it starts again from the file's value.
  const about = file.map((u, j) => {
    const { from, to } = setup.coordinates[j];
    const end = rough[0]?.x[j] ?? u;
    return end <= from || end >= to ? u : end;
  });
  const walks = delayWalks(setup, about);
  const steps = walks.reduce((sum, w) => sum + w.at.length, 0);
  const counts = startCounts(setup, steps, plan);
  const walked = betterHalf(problem, walkStarts(walks, about, counts.walked), watch);
  const drawn = betterHalf(problem, drawnStarts(setup, counts.drawn, plan.seed, allowed, watch.cancelled), watch);
  planned = rough.length + walked.length + drawn.length;
  descendFrom(walked);
  descendFrom(drawn);
  const ends = distinct(
    distinct(rough, 1e-2)
      .slice(0, closer)
      .map((c, i, [best]) =>
        i < always || c.sum < near * best.sum ? { ...descend(problem, c.x, closely, watch), reached: c.reached } : c,
      ),
    1e-3,
  );
  if (ends.length === 0) return { best: undefined, optima: [], cancelled: watch.cancelled() };
  const hopped = counts.walked > 0 ? hop(problem, ends[0], watch) : ends[0];
  const free = descend(problem, hopped.x, fully, watch);
  const best = { ...onBounds(problem, free, watch), reached: hopped.reached };
  return { best, optima: distinct([best, ...ends], 1e-3), cancelled: watch.cancelled() };
}

/** Starts with the smaller sums of squares, best first; those that make no vessel are left out. */
function betterHalf(problem: Problem, starts: readonly Float64Array[], watch: Watch): Float64Array[] {
  const rated = starts.map((x) => ({
    x,
    sum: watch.cancelled() ? Infinity : (problem.evaluate(x)?.ofAll ?? Infinity),
  }));
  const possible = rated.filter((r) => Number.isFinite(r.sum)).sort((a, b) => a.sum - b.sum);
  return possible.slice(0, Math.ceil(starts.length / 2)).map((r) => r.x);
}

const samePlace = (a: Optimum, b: Optimum, apart: number): boolean => a.x.every((v, j) => Math.abs(v - b.x[j]) < apart);

export interface Effort {
  readonly tolerance: number;
  readonly evaluationsPerUnknown: number;
  readonly polish: boolean;
  /** Relative step under which a descent is at its end, for data that put jumps beside the optimum. */
  readonly smallest?: number;
}
const roughly: Effort = { tolerance: 1e-3, evaluationsPerUnknown: 10, polish: false };
export const closely: Effort = { tolerance: 1e-7, evaluationsPerUnknown: 30, polish: false };
export const fully: Effort = { tolerance: 1e-12, evaluationsPerUnknown: 200, polish: true };

/**
 * One descent from a point; an end of infinite sum where there is no vessel.
 * @param still  a coordinate that stays where it is
 */
export function descend(problem: Problem, from: Float64Array, effort: Effort, watch: Watch, still?: number): Optimum {
  const { coordinates } = problem.setup;
  const facts = from.length - coordinates.length;
  if (from.length === 0) {
    const only = problem.evaluate(from);
    return { x: from, sum: only?.ofAll ?? Infinity, converged: only !== undefined, reached: 1 };
  }
  const missing = new Float64Array(problem.setup.observations + problem.priors.length).fill(Number.NaN);
  const run = leastSquares({
    residuals: (x) => problem.evaluate(x)?.residuals ?? missing,
    jacobian: (x) => {
      const at = problem.evaluate(x);
      return at ? projectedJacobian(problem, x, at) : [];
    },
    allowed: (x) => problem.evaluate(x) !== undefined,
    start: from,
    scale: new Float64Array(from.length).fill(1),
    lower: [
      ...coordinates.map((c, j) => (j === still ? from[j] : c.from)),
      ...new Array<number>(facts).fill(-Infinity),
    ],
    upper: [...coordinates.map((c, j) => (j === still ? from[j] : c.to)), ...new Array<number>(facts).fill(Infinity)],
    tolerance: effort.tolerance,
    polish: effort.polish,
    ...(effort.smallest === undefined ? {} : { smallest: effort.smallest }),
    maxEvaluations: effort.evaluationsPerUnknown * (from.length + 1),
    cancelled: () => watch.cancelled(),
  });
  const x = Float64Array.from(run.parameters);
  const sum = problem.evaluate(x)?.ofAll ?? Infinity;
  return { x, sum, converged: run.converged, reached: 1 };
}

/** Best first; ends closer than `apart` in every coordinate are one. */
function distinct(ends: readonly Optimum[], apart: number): Optimum[] {
  const kept: Optimum[] = [];
  for (const end of [...ends].sort((a, b) => a.sum - b.sum)) {
    if (!Number.isFinite(end.sum)) continue;
    const same = kept.findIndex((k) => samePlace(k, end, apart));
    if (same < 0) kept.push(end);
    else kept[same] = { ...kept[same], reached: kept[same].reached + end.reached };
  }
  return kept;
}

/** So near to a bound an end is tried on it as well; u. */
const beside = 1e-3;

/** A better end where coordinates that are all but on a bound lie on it: the sum of squares may jump there, as a density does where a tank becomes whole. */
export function onBounds(problem: Problem, end: Optimum, watch: Watch): Optimum {
  let best = end;
  for (const [j, { from, to }] of problem.setup.coordinates.entries()) {
    const bound = end.x[j] - from < beside ? from : to - end.x[j] < beside ? to : undefined;
    if (bound === undefined || watch.cancelled()) continue;
    const start = withCoordinate(best.x, j, bound);
    if (!problem.evaluate(start)) continue;
    const held = descend(problem, start, fully, watch, j);
    if (!(held.sum < best.sum * (1 - 1e-9))) continue;
    const again = descend(problem, held.x, fully, watch);
    best = again.sum <= held.sum && again.converged ? again : held;
  }
  return best;
}

function hop(problem: Problem, from: Optimum, watch: Watch): Optimum {
  let best = from;
  for (let round = 0; round < 10; round++) {
    const before = best;
    for (const walk of delayWalks(problem.setup, best.x)) {
      const { gap } = walk;
      const { from: low, to: high } = problem.setup.coordinates[walk.index];
      for (const gaps of [-2, -1, 1, 2]) {
        const u = before.x[walk.index] + gaps * gap;
        if (gap === 0 || u < low || u > high || watch.cancelled()) continue;
        const start = withCoordinate(before.x, walk.index, u);
        if (!problem.evaluate(start)) continue;
        const end = descend(problem, start, roughly, watch);
        if (end.sum < best.sum * (1 - 1e-9)) best = { ...end, reached: best.reached };
      }
    }
    if (best === before) return best;
    best = { ...descend(problem, best.x, closely, watch), reached: best.reached };
  }
  return best;
}
