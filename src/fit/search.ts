import { leastSquares } from "../numerics/least-squares.js";
import type { Problem } from "./problem.js";
import { delayWalks, withCoordinate } from "./starts.js";

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
}

/** Descents polished to the end after the rough ones. */
const polished = 4;

/**
 * The best of many descents: a rough one from every start, a full one from the best ends that differ, then hops of one sampling
 * gap to both sides along the delays of tubes for as long as that finds better.
 */
export function searchFrom(problem: Problem, starts: readonly Float64Array[], watch: Watch): SearchResult {
  const rough: Optimum[] = [];
  for (const [k, start] of starts.entries()) {
    if (watch.cancelled() && rough.length > 0) break;
    rough.push(descend(problem, start, roughly, watch));
    const best = Math.min(...rough.map((r) => r.sum));
    watch.progress({ start: k + 1, starts: starts.length, best, evaluations: problem.setup.cost.evaluations });
  }
  const clusters = distinct(rough, 1e-2).slice(0, polished);
  const fine = distinct(
    clusters.map((c) => ({ ...descend(problem, c.x, fully, watch), reached: c.reached })),
    1e-4,
  );
  if (fine.length === 0) return { best: undefined, optima: [], cancelled: watch.cancelled() };
  const best = hop(problem, fine[0], watch);
  const optima = distinct([best, ...fine], 1e-4);
  return { best, optima, cancelled: watch.cancelled() };
}

interface Effort {
  readonly tolerance: number;
  readonly evaluationsPerUnknown: number;
  readonly polish: boolean;
}
const roughly: Effort = { tolerance: 1e-3, evaluationsPerUnknown: 10, polish: false };
export const fully: Effort = { tolerance: 1e-12, evaluationsPerUnknown: 200, polish: true };

/** One descent from a point; an end of infinite sum where there is no vessel. */
export function descend(problem: Problem, from: Float64Array, effort: Effort, watch: Watch): Optimum {
  const { coordinates } = problem.setup;
  const facts = from.length - coordinates.length;
  if (from.length === 0) {
    const only = problem.evaluate(from);
    return { x: from, sum: only?.ofAll ?? Infinity, converged: only !== undefined, reached: 1 };
  }
  const missing = new Float64Array(problem.setup.observations + problem.priors.length).fill(Number.NaN);
  const run = leastSquares({
    residuals: (x) => problem.evaluate(x)?.residuals ?? missing,
    allowed: (x) => problem.evaluate(x) !== undefined,
    start: from,
    scale: new Float64Array(from.length).fill(1),
    lower: [...coordinates.map((c) => c.from), ...new Array<number>(facts).fill(-Infinity)],
    upper: [...coordinates.map((c) => c.to), ...new Array<number>(facts).fill(Infinity)],
    tolerance: effort.tolerance,
    polish: effort.polish,
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
    const same = kept.findIndex((k) => k.x.every((v, j) => Math.abs(v - end.x[j]) < apart));
    if (same < 0) kept.push(end);
    else kept[same] = { ...kept[same], reached: kept[same].reached + end.reached };
  }
  return kept;
}

function hop(problem: Problem, from: Optimum, watch: Watch): Optimum {
  let best = from;
  for (let round = 0; round < 10; round++) {
    const before = best;
    for (const walk of delayWalks(problem.setup, best.x)) {
      const gap = walk.at.length > 1 ? walk.at[1] - walk.at[0] : 0;
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
    best = { ...descend(problem, best.x, fully, watch), reached: best.reached };
  }
  return best;
}
