import { correlationTimes } from "../numerics/autoregression.js";
import { chainOf } from "./autocorrelation.js";
import { orthonormalBasis } from "./basis.js";
import { fullJacobian } from "./jacobian.js";
import type { Block } from "./observations.js";
import { type Evaluation, type Prior, type Problem, problemWith } from "./problem.js";
import { descend, fully, type Optimum, type Watch } from "./search.js";
import type { Setup } from "./setup.js";
import { type Weights, weightsFor } from "./weights.js";

/** The end of a fit: its last problem, weights, point and evaluation. */
export interface Settled {
  readonly problem: Problem;
  readonly weights: Weights;
  readonly x: Float64Array;
  readonly at: Evaluation;
  readonly converged: boolean;
}

/**
 * From the best optimum of the plain problem to the end: weights that depend on the fit are renewed, declared `±` join as priors
 * in units of the residual spread, and the descent is repeated until nothing moves.
 */
export function settle(
  setup: Setup,
  first: Weights,
  problem: Problem,
  found: Optimum,
  watch: Watch,
): Settled | undefined {
  const at = problem.evaluate(found.x);
  if (!at) return undefined;
  const withPriors = setup.held.length > 0 || setup.coordinates.some((c) => c.named.value.sd);
  let settled: Settled = { problem, weights: first, x: found.x, at, converged: found.converged };
  if (!withPriors && !first.moving) return settled;
  let x = Float64Array.from({ length: found.x.length + setup.held.length }, (_, j) => found.x[j] ?? 0);
  let pull = 0;
  let linked = setup;
  for (let round = 0; round < 20; round++) {
    const { problem: before, at: old } = settled;
    if (round < timed) linked = hangingBlocks(linked, before, x, old);
    const weights = first.moving ? weightsFor(linked, { ...old, before: before.weight }) : first;
    const own = weights.blocks ? { ...linked, blocks: weights.blocks } : linked;
    const spread = spreadOf(problemWith(own, weights.weight, priorsOf(own, 1)), x, pull);
    const next = problemWith(own, weights.weight, priorsOf(own, spread));
    const end = descend(next, x, fully, watch);
    const here = next.evaluate(end.x);
    if (!here) return settled;
    const moved = end.x.reduce((most, v, j) => Math.max(most, Math.abs(v - x[j])), 0);
    x = Float64Array.from(end.x);
    pull = (here.ofAll - here.ofData) / spread ** 2;
    const still = round > 0 && moved < 1e-8 && (round >= timed || linked === setup);
    settled = { problem: next, weights, x, at: here, converged: end.converged && (still || round < 19) };
    if (still || watch.cancelled()) return settled;
  }
  return settled;
}

/** Rounds in which fitted correlation times are found anew: they settle fast, and are known no better than to a hundredth. */
const timed = 4;

/** The setup with the correlation times of readings that ask for fitted ones, by restricted likelihood about a point. */
function hangingBlocks(setup: Setup, { weight }: Problem, x: Float64Array, at: Evaluation): Setup {
  const asks = (b: Block): boolean => b.declared.correlated === "fitted";
  if (!setup.blocks.some(asks)) return setup;
  const blocks = setup.blocks.map(
    ({ hangsTogether, ...b }): Block => (asks(b) || !hangsTogether ? b : { ...b, hangsTogether }),
  );
  const plain = problemWith({ ...setup, blocks }, weight);
  const point = x.subarray(0, setup.coordinates.length);
  const here = plain.evaluate(point) ?? at;
  const basis = orthonormalBasis(fullJacobian(plain, point, here));
  const residuals = here.residuals.subarray(0, setup.observations);
  const found = correlationTimes(
    residuals,
    basis,
    blocks.map((b) => (asks(b) ? chainOf(b) : { rows: [], gaps: new Float64Array(0) })),
  );
  return {
    ...setup,
    blocks: blocks.map((b, k) => (asks(b) && found[k].time > 0 ? { ...b, hangsTogether: found[k].time } : b)),
  };
}

/** Degrees of freedom of a problem: a censored reading counts by its information, the prior of a parameter counts as an observation, a held fact and its prior cancel. */
export function freedomOf({ setup, linear, priors }: Problem): number {
  const n = setup.coordinates.length;
  const unseen = setup.blocks.reduce(
    (sum, b) => sum + (b.information ? b.information.reduce((s, share) => s + 1 - share, 0) : 0),
    0,
  );
  return Math.max(0, setup.observations - unseen + priors.filter((p) => p.index < n).length - n - linear);
}

/**
 * Standard deviation s of one weighted residual at a point, such that data and priors together come to as many s^2 as there are
 * degrees of freedom; 1 where it cannot be told.
 * @param pull  sum of squared deviations of the priors there, each in its own standard deviation
 */
function spreadOf(problem: Problem, x: Float64Array, pull: number): number {
  const freedom = freedomOf(problem);
  const at = problem.evaluate(x);
  if (!at || freedom === 0 || at.ofData === 0) return 1;
  return Math.sqrt(at.ofData / (freedom > pull ? freedom - pull : freedom));
}

/** Declared `±` of parameters and facts as residuals; `spread`: that of one weighted residual of the data. */
export function priorsOf(setup: Setup, spread: number): Prior[] {
  const ofParameters = setup.coordinates.flatMap((c, index): Prior[] => {
    const sd = c.named.value.sd?.(setup.env) ?? 0;
    if (!(sd > 0)) return [];
    const declared = setup.env[c.named.slot];
    return [
      {
        index,
        spread,
        residual: (u) => (spread * (declared - c.toSi(u))) / sd,
        slope: (u) => (-spread * c.slope(u)) / sd,
      },
    ];
  });
  const n = setup.coordinates.length;
  const ofFacts = setup.held.map(
    (_, j): Prior => ({ index: n + j, spread, residual: (e) => -spread * e, slope: () => -spread }),
  );
  return [...ofParameters, ...ofFacts];
}
