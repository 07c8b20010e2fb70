import type { Block } from "./observations.js";
import { type Evaluation, type Prior, type Problem, problemWith } from "./problem.js";
import { descend, type Effort, type Watch } from "./search.js";
import type { Setup } from "./setup.js";
import { weightsFor } from "./weights.js";

/** What a reading with limits shows of values: beyond a limit that alone. */
export function seenWithinLimits(block: Block, values: Float64Array): Block {
  const { below = Number.NEGATIVE_INFINITY, above = Number.POSITIVE_INFINITY } = block.declared.limits;
  const censored = Int8Array.from(values, (v) => (v <= below ? -1 : v >= above ? 1 : 0));
  const { information, ...rest } = block;
  const measured = values.map((v) => Math.min(above, Math.max(below, v)));
  return { ...rest, measured, censored: censored.some((side) => side !== 0) ? censored : undefined };
}

/** Most times that what stands for censored readings is renewed, and the move of a coordinate that ends it. */
const mostRounds = 15;
const still = 1e-5;

/**
 * A descent on data of which some are censored: what stands for those, and their weight, is renewed until nothing moves.
 * @param begin  a fit nearby, and the weights that it had
 * @returns the last problem and its end; undefined where there is no vessel
 */
export function descendCensored(
  setup: Setup,
  priors: readonly Prior[],
  begin: { readonly x: Float64Array; readonly at: Evaluation; readonly before: Float64Array },
  effort: Effort,
  watch: Watch,
): { problem: Problem; x: Float64Array; sum: number; converged: boolean } | undefined {
  let { x, at, before } = begin;
  for (let round = 1; ; round++) {
    const { weight, blocks } = weightsFor(setup, { ...at, before });
    const problem = problemWith({ ...setup, blocks: blocks ?? setup.blocks }, weight, priors);
    const end = descend(problem, x, effort, watch);
    const here = problem.evaluate(end.x);
    if (!here) return undefined;
    const moved = end.x.reduce((most, v, j) => Math.max(most, Math.abs(v - x[j])), 0);
    [x, at, before] = [end.x, here, weight];
    if (moved < still || round === mostRounds)
      return { problem, x, sum: end.sum, converged: end.converged && moved < still };
  }
}
