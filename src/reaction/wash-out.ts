import type { Curve, CurvePoint } from "../numerics/continuation.js";

/** Where a curve of steady states runs into one without something that keeps itself going: cells that are washed out. */
export interface WashOut {
  /** The point at which nothing of it is left. */
  readonly end: CurvePoint;
  /** Components that go to nothing, by their place in a mixture. */
  readonly components: readonly number[];
}

/** Parts of the most that there is of a component on the curve: below the first it is as good as gone, above it there is some. */
const gone = 0.02;

/**
 * The last point of a curve that could be followed no further because a component goes to nothing there, found by a straight
 * line through the last two; undefined where it ends for another reason.
 * @param points towards that end
 * @param species components of a mixture that are concentrations; a mixture has `size`
 */
export function washOut(
  points: Curve["points"],
  { size, species }: { readonly size: number; readonly species: number },
): WashOut | undefined {
  const [before, last] = points.slice(-2);
  if (!before || !last || before.p === last.p) return undefined;
  const vanishing = [...last.y.keys()].filter((k) => {
    if (k % size >= species) return false;
    const most = points.reduce((m, q) => Math.max(m, q.y[k]), 0);
    return most > 1e-9 && last.y[k] < gone * most && last.y[k] < 0.99 * before.y[k];
  });
  // All of it goes at one place: at a straight line's end.
  const ends = vanishing.map((k) => last.p + ((last.p - before.p) * last.y[k]) / (before.y[k] - last.y[k]));
  const p = ends.sort((a, b) => a - b)[Math.floor(ends.length / 2)];
  const step = Math.abs(last.p - before.p);
  if (p === undefined || p < 0 || p > 1 || Math.abs(p - last.p) > Math.max(20 * step, 1e-3)) return undefined;
  const share = (p - last.p) / (last.p - before.p);
  const y = last.y.map((x, k) => (vanishing.includes(k) ? 0 : x + share * (x - before.y[k])));
  return {
    end: { y, p, slope: last.slope, turn: true },
    components: [...new Set(vanishing.map((k) => k % size))],
  };
}
