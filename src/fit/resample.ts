import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { colour, whiten } from "../numerics/autoregression.js";
import { studentTQuantile } from "../numerics/distributions.js";
import { type Random, random } from "../numerics/random.js";
import { collector } from "../problems/report.js";
import { autocorrelationOf } from "./autocorrelation.js";
import { orthonormalBasis } from "./basis.js";
import { betweenReadings } from "./between-readings.js";
import { linearTheory } from "./covariance.js";
import { hangingTogether } from "./hanging-together.js";
import type { Facts } from "./held.js";
import { allCurveSlopes, fullJacobian } from "./jacobian.js";
import { modelOf } from "./model-of.js";
import type { Block } from "./observations.js";
import { prepare } from "./prepare.js";
import { type Known, type Prior, problemWith } from "./problem.js";
import { descendCensored, seenWithinLimits } from "./refit-censored.js";
import { descend, type Effort, type Optimum, type Watch } from "./search.js";
import { freedomOf, type Settled, settle } from "./settle.js";
import type { Setup } from "./setup.js";
import { delayWalks, withCoordinate } from "./starts.js";
import { fittedCurve, weightsFor } from "./weights.js";

/** How new data are made from a fit. */
export type Resampling =
  /** Residuals drawn with replacement; where they hang together, what makes each differ from the one before (P. Bühlmann, Bernoulli 3 (1997) 123-148, of first order). */
  | "residual"
  /** The same in blocks of neighbours, so that they hang together as they did. */
  | "block"
  /** Normal errors of the fitted spread; hanging together where the residuals do. */
  | "parametric";

/** A fit to go back to. */
export interface Refits {
  /** Names of the parameters, in the order of the values of a refit. */
  readonly names: readonly string[];
  readonly resampling: Resampling;
  /** Points in a block; 1 where neighbours do not matter. */
  readonly block: number;
  /** Names (their places) that a front between two readings may leave open. */
  readonly between: readonly number[];
  /**
   * Values of refit number r (SI), then for each of `between` the least and the highest that it stands for; undefined where it did
   * not converge. It depends on the seed and r alone.
   */
  refit(r: number): readonly number[] | undefined;
}

/** What a resampling needs to know. */
export interface RefitOptions {
  readonly free?: readonly string[];
  /** Fitted values, SI by name. */
  readonly values: Readonly<Record<string, number>>;
  /** Default: residuals. */
  readonly resampling?: Resampling;
  readonly seed: number;
}

/** Points of a reading from which on its residuals are drawn; below, normal errors of the fitted spread stand in. */
const fewestDrawn = 4;

const refitting: Effort = { tolerance: 1e-8, evaluationsPerUnknown: 40, polish: false, smallest: 1e-6 };
const unwatched: Watch = { cancelled: () => false, progress: () => {} };

/**
 * Refits of a network to data made anew from its fit, each from the optimum: what is declared with a `±` and what a calibration
 * leaves open are drawn anew as well. Residuals are drawn within each reading, centred, and as large as the degrees of freedom
 * make them. Readings of which some were beyond a limit get normal errors, and those that then lie beyond it are censored.
 * @returns undefined where the values make no fit
 * @see B. Efron, R. Tibshirani, An Introduction to the Bootstrap, Chapman & Hall 1993, ch. 9; blocks: H.R. Künsch, Ann. Statist. 17 (1989) 1217-1241
 */
export function refitsOf(network: Network, trials: readonly Trial[], options: RefitOptions): Refits | undefined {
  const { report } = collector();
  const { model, whole } = modelOf(network, trials);
  const setup = prepare(model, whole, trials, options.free, report);
  if (!setup) return undefined;
  const weights = weightsFor(setup);
  const problem = problemWith(setup, weights.weight);
  const x = Float64Array.from(setup.coordinates, (c) => c.fromSi(options.values[c.name]));
  const sum = problem.evaluate(x)?.ofAll ?? Number.POSITIVE_INFINITY;
  const settled = settle(setup, weights, problem, { x, sum, converged: true, reached: 1 }, unwatched);
  return settled && new Resampler(settled, options.resampling, options.seed);
}

class Resampler implements Refits {
  readonly names: readonly string[];
  readonly resampling: Resampling;
  readonly block: number;
  readonly between: readonly number[];
  private readonly phi: ReadonlyMap<number, Float64Array>;
  private readonly spread: number;
  private readonly inflate: number;
  private readonly fitted: readonly Float64Array[];
  private readonly gaps;
  private readonly t: number;
  private readonly known: Known | undefined;

  constructor(
    private readonly settled: Settled,
    resampling: Resampling | undefined,
    private readonly seed: number,
  ) {
    const { problem, x, at } = settled;
    const { setup } = problem;
    const freedom = Math.max(1, freedomOf(problem));
    const columns = fullJacobian(problem, x, at).filter((_, j) => j < setup.coordinates.length || j >= x.length);
    const basis = orthonormalBasis(columns);
    const autocorrelation = autocorrelationOf(setup.blocks, at.residuals, {
      count: basis.length,
      columns: () => basis,
    });
    const hanging = hangingTogether(autocorrelation, linearTheory(columns), basis, [], at.residuals, freedom);
    const { significant, lag1 } = autocorrelation;
    this.phi = new Map(autocorrelation.strands.map((s) => [s.block, s.phi]));
    this.names = setup.coordinates.map((c) => c.name);
    this.resampling = resampling ?? "residual";
    this.block =
      this.resampling === "block"
        ? blockLength(significant ? Math.max(0.1, Math.min(lag1, 0.999)) : 0.1, setup.observations)
        : 1;
    this.spread = Math.sqrt(hanging?.variance ?? at.ofData / freedom);
    this.inflate = this.spread / Math.sqrt(at.ofData / setup.observations);
    this.fitted = setup.blocks.map((b, k) => fittedCurve(b.time, b.origin, at, k));
    // Every refit begins here, with other data but the same curves, where no fact was drawn anew.
    if (setup.constants.length === 0) this.known = { x, curves: at.curves, slopes: allCurveSlopes(problem, x, at) };
    this.gaps = delayWalks(setup, x).filter(({ gap }) => gap > 0);
    this.between = this.gaps.map(({ index }) => index);
    this.t = studentTQuantile(0.975, hanging?.freedom ?? freedom);
  }

  refit(r: number): number[] | undefined {
    const { problem, x } = this.settled;
    const draw = random(this.seed * 2 ** 24 + r);
    const measured = this.measured(draw);
    const { setup } = problem;
    const blocks = setup.blocks.map(
      (b, k): Block => (b.censored ? seenWithinLimits(b, measured[k]) : { ...b, measured: measured[k] }),
    );
    const deviations = setup.constants.map(() => draw.normal());
    const alter = (facts: Facts): void => {
      for (const [i, c] of setup.constants.entries()) c.move(facts, deviations[i] * c.sd);
    };
    const again: Setup = { ...setup, blocks, ...(deviations.length > 0 ? { alter } : {}) };
    const priors = problem.priors.map((prior) => redrawn(prior, x[prior.index], draw.normal()));
    const found = this.first(again, priors);
    if (!found) return undefined;
    const { problem: refitted } = found;
    let best: Pick<Optimum, "x" | "sum" | "converged"> = found;
    for (const { index, gap } of this.gaps) {
      for (const gaps of [-1, 1]) {
        // A front in the next gap is worth a descent where it is nearly as good as it stands.
        const beside = withCoordinate(best.x, index, best.x[index] + gaps * gap);
        const { from, to } = setup.coordinates[index];
        if (beside[index] < from || beside[index] > to) continue;
        if (!((refitted.evaluate(beside)?.ofAll ?? Number.POSITIVE_INFINITY) < 1.2 * best.sum)) continue;
        const other = descend(refitted, beside, refitting, unwatched);
        if (other.sum < best.sum) best = other;
      }
    }
    if (!best.converged) return undefined;
    const here = this.gaps.length > 0 ? refitted.evaluate(best.x) : undefined;
    const stretches = this.gaps.flatMap(({ index: j, gap }) => {
      const ends = here
        ? betweenReadings(refitted, best.x, here, { j, gap, variance: this.spread ** 2, t: this.t })
        : [best.x[j], best.x[j]];
      return ends.map((u) => setup.coordinates[j].toSi(u)).sort((a, b) => a - b);
    });
    return [...setup.coordinates.map((c, j) => c.toSi(best.x[j])), ...stretches];
  }

  /** The first descent, from the fit. */
  private first(setup: Setup, priors: readonly Prior[]) {
    const { problem, x, at } = this.settled;
    if (problem.setup.blocks.some((b) => b.censored))
      return descendCensored(setup, priors, { x, at, before: problem.weight }, refitting, unwatched);
    const refitted = problemWith(setup, problem.weight, priors, this.known);
    return { problem: refitted, ...descend(refitted, x, refitting, unwatched) };
  }

  /** New data of every reading. */
  private measured(draw: Random): Float64Array[] {
    const { problem, at, weights } = this.settled;
    return problem.setup.blocks.map((b, k) => {
      const n = b.time.length;
      const residuals = at.residuals.subarray(b.from, b.from + n);
      // What was not seen does not show how it spreads.
      const errors = b.censored ? residuals.map(() => this.spread * draw.normal()) : this.errors(k, residuals, draw);
      const doubts = b.doubts.map(() => draw.normal());
      return this.fitted[k].map((y, i) => {
        const doubt = b.doubts.reduce((sum, d, j) => sum + doubts[j] * d[i], 0);
        const sigma = b.censored ? weights.sigma[b.from + i] : 1 / problem.weight[b.from + i];
        return y + errors[i] * sigma + doubt;
      });
    });
  }

  /** Errors of one reading. Where its residuals hang together, what is drawn is what makes each differ from the one before. */
  private errors(k: number, residuals: Float64Array, draw: Random): Float64Array {
    const b = this.settled.problem.setup.blocks[k];
    const phi = this.phi.get(k);
    const places = phi && Array.from(b.time.keys()).filter((i) => !b.censored?.[i]);
    // So few residuals do not show how they spread: a single analysis least of all.
    const few = residuals.length < fewestDrawn;
    if (this.resampling === "block" && !few) return this.drawn(residuals, this.inflate, draw);
    let errors: Float64Array;
    if (few || this.resampling === "parametric") errors = residuals.map(() => this.spread * draw.normal());
    else if (phi && places) {
      const fresh = Float64Array.from(residuals);
      whiten(places, phi, fresh);
      const mean = fresh.reduce((sum, e) => sum + e, 0) / fresh.length;
      const own = Math.sqrt(fresh.reduce((sum, e) => sum + (e - mean) ** 2, 0) / fresh.length);
      errors = this.drawn(fresh, own > 0 ? this.spreadOf(residuals) / own : 1, draw);
    } else errors = this.drawn(residuals, this.inflate, draw);
    if (phi && places) colour(places, phi, errors);
    return errors;
  }

  private spreadOf(residuals: Float64Array): number {
    return this.inflate * Math.sqrt(residuals.reduce((sum, e) => sum + e * e, 0) / residuals.length);
  }

  private drawn(residuals: Float64Array, times: number, draw: Random): Float64Array {
    const n = residuals.length;
    const mean = residuals.reduce((sum, e) => sum + e, 0) / n;
    const length = Math.min(this.block, n);
    const errors = new Float64Array(n);
    for (let i = 0; i < n; i += length) {
      const from = draw.below(n - length + 1);
      for (let k = 0; k < length && i + k < n; k++) errors[i + k] = times * (residuals[from + k] - mean);
    }
    return errors;
  }
}

/** The declared value of a prior, drawn anew about where the fit put it. */
function redrawn(prior: Prior, at: number, z: number): Prior {
  const here = prior.residual(at);
  return { ...prior, residual: (u) => prior.residual(u) - here + prior.spread * z };
}

/** (2 r / (1 - r^2))^(2/3) n^(1/3), for residuals that hang together as a first-order autoregression (E. Carlstein, Ann. Statist. 14 (1986) 1171-1179; from memory). */
function blockLength(lag1: number, n: number): number {
  const length = ((2 * lag1) / (1 - lag1 * lag1)) ** (2 / 3) * n ** (1 / 3);
  return Math.max(1, Math.min(Math.round(length), Math.floor(n / 4)));
}
