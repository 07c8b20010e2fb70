import { Condenser } from "./condensed.js";
import { allCurveSlopes } from "./jacobian.js";
import type { Block } from "./observations.js";
import { type Evaluation, type Problem, problemWith } from "./problem.js";

/** Least factor in points that is worth it. */
const worth = 4;

/**
 * The same least-squares problem said by far fewer points, as good as the whole near a point: where the curve there is smooth, a
 * stretch of readings is put down to the few values that say all that they say of a polynomial through its nodes.
 * @param margin  readings: so far to either side of what is not smooth every reading is kept, as fronts may still move
 * @returns undefined where that gains little, or where readings are censored or hang together, or facts are held
 */
export function condense(problem: Problem, x: Float64Array, margin: number): Problem | undefined {
  const { setup, weight } = problem;
  if (problem.priors.length > 0 || setup.blocks.some((b) => b.censored || b.hangsTogether !== undefined))
    return undefined;
  const at = problem.evaluate(x);
  if (!at) return undefined;
  let from = 0;
  const blocks = setup.blocks.map((b, k): Block => {
    const own = weight.subarray(b.from, b.from + b.time.length);
    const condensed = new Condenser(b.time, b.measured, own, at.curves[k], margin).condensed();
    const { time, target } = condensed;
    const block = { ...b, from, time, measured: target, doubts: [], condensed };
    from += time.length;
    return block;
  });
  if (from * worth > setup.observations) return undefined;
  return problemWith({ ...setup, blocks, observations: from }, new Float64Array(from).fill(1));
}

/** What a curve and its slopes may be off from what few readings say of them, as parts of their peaks. */
const curveOff = 1e-9;
const slopeOff = 1e-7;

/**
 * Does a problem of fewer points still stand for the whole at a point: is the curve at all readings what the few say of it, and are its
 * slopes, asked at the ties and between them? Then the optimum of the one is that of the other, and so are its errors.
 * @returns the evaluation of the whole there
 */
export function stillStands(close: Problem, problem: Problem, x: Float64Array): Evaluation | undefined {
  const at = problem.evaluate(x);
  const condensed = close.setup.blocks.map((b) => b.condensed);
  if (!at || !condensed.every((c, b) => c?.follows(at.curves[b], curveOff))) return undefined;
  let from = 0;
  const blocks = problem.setup.blocks.map((b, k): Block => {
    const time = Float64Array.from(condensed[k]?.probes ?? [], (i) => b.time[i]);
    from += time.length;
    return { ...b, from: from - time.length, time, measured: time, doubts: [] };
  });
  const probing = problemWith({ ...problem.setup, blocks, observations: from }, new Float64Array(from).fill(1));
  const there = probing.evaluate(x);
  const slopes = there && allCurveSlopes(probing, x, there);
  const follow = slopes?.every((s) => condensed.every((c, b) => !s || c?.followsProbes(s[b], slopeOff)));
  return follow ? at : undefined;
}
