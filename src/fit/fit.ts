import { checkTrial } from "../check/trial.js";
import { compile } from "../compile/compile.js";
import { isNoise } from "../data/noise.js";
import { hasSignal } from "../data/signal.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Problem } from "../problems/problem.js";
import { collector, hasErrors, type Report } from "../problems/report.js";
import { trialOn } from "../resolve/trial-on.js";
import { untraceable } from "../simulate/trace.js";
import { formatQuantity } from "../units/format.js";
import { condense, stillStands } from "./condense.js";
import { criteriaOf } from "./criteria.js";
import { estimatesOf } from "./estimates.js";
import { findingsOf, flatLines } from "./findings.js";
import type { ForwardModel } from "./forward.js";
import { modelOf } from "./model-of.js";
import { countOf, thinned } from "./observations.js";
import { prepare } from "./prepare.js";
import { type Problem as LinearProblem, problemWith } from "./problem.js";
import { notLinear, profilesOf } from "./profiles.js";
import { cannotFollow } from "./reacting-model.js";
import { repeatsOf } from "./repeats.js";
import { lackOfFit } from "./replicates.js";
import type { Fit, FittedParameter, FittedReading, FoundOptimum } from "./result.js";
import { descend, fully, type SearchResult, searchFrom, type Watch } from "./search.js";
import { type Settled, settle } from "./settle.js";
import { type Setup, valuesAt } from "./setup.js";
import type { StartPlan } from "./starts.js";
import { fittedCurve, weightsFor } from "./weights.js";

export interface FitOptions {
  /** Parameters to estimate; the others stay at their value. Default: all. */
  readonly free?: readonly string[];
  /** Starts besides the file's own values; default: as many as the number of parameters and the tubes call for; 0: none. */
  readonly starts?: number;
  /** Of the low-discrepancy starts. Default 1. */
  readonly seed?: number;
  /** Compare a network without parameters as it stands (a rival in a study) instead of refusing it. */
  readonly asItStands?: boolean;
  /** Asked often; true ends the fit with the best so far, marked. */
  /** Profiles of all parameters too: about as much again as the fit. */
  readonly profile?: boolean;
  readonly cancelled?: () => boolean;
  readonly progress?: Watch["progress"];
}

/** `fit` is undefined where `problems` hold an error. */
export interface FitOutcome {
  readonly fit: Fit | undefined;
  readonly problems: readonly Problem[];
}

/**
 * Estimates the parameters of a network, and of the chemistries that trials name, from all trials at once by bounded nonlinear least squares from many starts, linear terms
 * (scale, offset, drift) taken out by variable projection.
 * Never throws on what a file can hold; deterministic for a given seed.
 */
export function fit(network: Network, trials: readonly Trial[], options: FitOptions = {}): FitOutcome {
  const { plant } = compile(network);
  const refused = [...(plant ? untraceable(plant) : []), ...cannotFollow(network, trials)];
  if (refused.length > 0) return { fit: undefined, problems: refused };
  const { model, whole } = modelOf(network, trials);
  return fitWith(model, whole, trials, options);
}

/** The same with any forward model in place of the exact tracer response. */
export function fitWith(
  model: ForwardModel,
  network: Network,
  declared: readonly Trial[],
  options: FitOptions = {},
): FitOutcome {
  const { report, problems } = collector();
  for (const trial of declared) checkTrial(network, trial, report);
  const trials = declared.map((t) => trialOn(network, t));
  const setup = hasErrors(problems)
    ? undefined
    : prepare(model, network, trials, options.free, report, options.asItStands);
  if (!setup) return { fit: undefined, problems };
  const watch: Watch = { cancelled: () => options.cancelled?.() ?? false, progress: options.progress ?? (() => {}) };

  if (!anySignal(setup, report)) return { fit: undefined, problems };
  const weights = weightsFor(setup);
  const problem = problemWith(setup, weights.weight);
  const unknowns = setup.coordinates.length + problem.linear;
  if (setup.observations < fewestFor(setup, unknowns)) {
    report("too-few-points", trials[0]?.at ?? network.at, { points: setup.observations, unknowns });
    return { fit: undefined, problems };
  }
  const file = Float64Array.from(setup.coordinates, (c) => c.fromSi(c.start));
  const plan = { others: options.starts, seed: options.seed ?? 1 };
  const found = search(setup, problem, file, plan, watch);
  const settled = found.best && settle(setup, weights, problem, found.best, watch);
  if (!settled) {
    report("no-start", network.at, { tried: setup.cost.evaluations });
    return { fit: undefined, problems };
  }
  if (nothingButNoise(setup, settled, report)) return { fit: undefined, problems };
  const wanted = options.profile === true;
  let [end, result] = [settled, resultOf(setup, settled, found, wanted, watch)];
  // A look about the optimum may fall upon a better one.
  for (let round = 0; round < mostBetter && result.better && !watch.cancelled(); round++) {
    const lower = descend(end.problem, result.better, fully, watch);
    if (!(lower.sum < end.at.ofAll)) break;
    // Facts that are held come in anew as the fit settles.
    const best = { ...lower, x: lower.x.slice(0, setup.coordinates.length) };
    const again = settle(setup, weights, problem, best, watch);
    if (!again || again.at.ofAll > end.at.ofAll) break;
    end = again;
    const better = { ...found, best, optima: [best, ...found.optima], close: undefined };
    result = resultOf(setup, again, better, wanted, watch);
  }
  return { fit: result.fit, problems };
}

/** So often a better optimum is followed. */
const mostBetter = 3;

/** Points of a curve below which no fit says anything. */
const fewestOfCurve = 5;

/** Points that so many unknowns need: of curves enough to tell how far readings scatter, where no `noise:` says so, and how rivals stand. */
function fewestFor({ blocks }: Setup, unknowns: number): number {
  if (blocks.some((b) => b.declared.of)) return unknowns + 1;
  return Math.max(fewestOfCurve, unknowns + (blocks.every((b) => b.declared.noise) ? 1 : 3));
}

/** A fit to nothing but constants would be numbers made of nothing. One reading that moves is enough. */
function anySignal({ blocks }: Setup, report: Report): boolean {
  const [{ key, declared, measured }] = blocks;
  if (blocks.every((b) => b.censored?.every((f) => f !== 0))) {
    const side = blocks[0].censored?.every((f) => f < 0) ? "below" : "beyond";
    report("all-beyond-limits", declared.where, { key, side, others: blocks.length - 1 });
    return false;
  }
  if (blocks.some((b) => b.declared.of?.steady || hasSignal(b.measured))) return true;
  const value = formatQuantity(measured[0], declared.unit, 3);
  report("no-signal-to-fit", declared.where, { key, value, others: blocks.length - 1 });
  return false;
}

/** Does every reading look like noise, and the fit leave no less of it than a flat line, by the penalty of BIC for its parameters? */
function nothingButNoise(setup: Setup, settled: Settled, report: Report): boolean {
  const { blocks, observations: n, coordinates } = setup;
  if (blocks.some((b) => b.declared.of || b.time.length < fewestForNoise || !isNoise(b.time, b.measured))) return false;
  const { fitted, flat } = flatLines(readingsOf(setup, settled));
  const more = coordinates.length + Math.max(0, settled.problem.linear - blocks.length);
  if (n * Math.log(fitted / flat) + more * Math.log(n) < 0) return false;
  const [{ declared, key }] = blocks;
  report("only-noise-to-fit", declared.where, { key, others: blocks.length - 1 });
  return true;
}

/** Points below which noise is not told from a curve. */
const fewestForNoise = 12;

/** Points that the search for the right valley looks at; the last descent takes them all. */
const searchPoints = 600;

function search(setup: Setup, problem: LinearProblem, file: Float64Array, plan: StartPlan, watch: Watch): SearchResult {
  if (file.length === 0) return alone(problem, file);
  const blocks = thinned(setup.blocks, searchPoints);
  if (blocks === setup.blocks) return searchFrom(problem, file, plan, watch);
  const coarse: Setup = { ...setup, blocks, observations: countOf(blocks) };
  const found = searchFrom(problemWith(coarse, weightsFor(coarse).weight), file, plan, watch);
  if (!found.best) return found;
  // All readings are met by way of few numbers that say the same, where there are such; then by themselves.
  const margin = Math.ceil((2 * setup.observations) / coarse.observations);
  const close = condense(problem, found.best.x, margin);
  const few = close && descend(close, found.best.x, fully, watch);
  const near = few?.x ?? found.best.x;
  const others = found.optima.slice(1).map((o) => ({ ...o, sum: problem.evaluate(o.x)?.ofAll ?? Infinity }));
  const stood = close && few?.converged ? stillStands(close, problem, near) : undefined;
  const ended = stood ? { x: near, sum: stood.ofAll, converged: true } : descend(problem, near, fully, watch);
  const best = { ...ended, reached: found.best.reached };
  const stands = close && stood && { problem: close, standsFor: problem };
  return { best, optima: [best, ...others], cancelled: watch.cancelled(), close: stands };
}

/** Nothing to search: the only point there is. */
function alone(problem: LinearProblem, x: Float64Array): SearchResult {
  const at = problem.evaluate(x);
  const best = at && { x, sum: at.ofAll, converged: true, reached: 1 };
  return { best, optima: best ? [best] : [], cancelled: false };
}

function resultOf(
  setup: Setup,
  settled: Settled,
  found: SearchResult,
  profile: boolean,
  watch: Watch,
): { fit: Fit; better: Float64Array | undefined } {
  const { x, at, weights, problem } = settled;
  const rises = found.close?.standsFor === problem ? found.close.problem : problem;
  const estimates = estimatesOf(settled, rises);
  const unit = weights.inUnit ? setup.blocks[0].unit : undefined;
  const freeParameters = setup.coordinates.length + problem.linear;
  const { observations } = setup;
  const optima = found.optima.map(
    (o): FoundOptimum => ({ values: valuesAt(setup, o.x), residualSumOfSquares: o.sum, starts: o.reached }),
  );
  const converged = settled.converged && !found.cancelled;
  const n = setup.coordinates.length;
  const { significant, gain, strands, effective } = estimates.autocorrelation;
  const readings = readingsOf(setup, settled);
  const told = converged && !watch.cancelled();
  const repeats = repeatsOf({
    trials: setup.trials,
    blocks: setup.blocks,
    env: setup.env,
    apart: setup.coordinates.some((c) => c.trial !== undefined),
  });
  const lack = lackOfFit({
    families: repeats.families,
    blocks: setup.blocks,
    readings,
    terms: problem.projectors.map((p) => p.terms),
    left: { sum: at.ofAll, freedom: estimates.freedom },
  });
  const profiles = profile && told ? profilesOf(settled, estimates, watch) : undefined;
  const notHolding = told && !profiles ? notLinear(rises, x, estimates, watch) : [];
  const fit: Fit = {
    parameters: found.cancelled ? estimates.parameters.map(unsure) : estimates.parameters,
    values: valuesAt(setup, x),
    nuisance: estimates.nuisance,
    residualSumOfSquares: at.ofData,
    residualUnit: unit,
    observations,
    freeParameters,
    ...criteriaOf(
      at.ofData,
      observations,
      freeParameters,
      weights.variances,
      weights.logVariances,
      significant ? { gain, times: strands.length, effective } : undefined,
    ),
    correlation: estimates.correlation,
    covariance: estimates.covariance,
    freedom: estimates.told,
    converged,
    stopped: found.cancelled ? "cancelled" : undefined,
    evaluations: setup.cost.evaluations,
    optima,
    readings,
    held: setup.held.map((h, j) => ({ says: h.says, deviations: x[n + j] ?? 0 })),
    ...(profiles ? { profiles } : {}),
    ...(lack ? { lackOfFit: lack } : {}),
    ...(repeats.unlike.length > 0 ? { unlike: repeats.unlike } : {}),
    findings: findingsOf({
      setup,
      estimates,
      readings,
      optima,
      converged,
      cancelled: found.cancelled,
      profiles: profiles ?? [],
      notLinear: notHolding,
      lackOfFit: lack,
    }),
  };
  return { fit, better: notHolding.find((p) => p.better)?.better };
}

/** Where a fit was cut short there is a best so far, and no telling how good it is. */
const unsure = (p: FittedParameter): FittedParameter => ({ ...p, standardError: undefined, interval95: undefined });

/** Every reading beside the curve at one point of a problem. */
export function readingsOf(setup: Setup, { at, problem }: Pick<Settled, "at" | "problem">): FittedReading[] {
  return setup.blocks.map((block, b) => {
    const fitted = fittedCurve(block.time, block.origin, at, b);
    return {
      trial: setup.trials[block.trial].title,
      at: block.declared.at,
      ...(block.declared.of ? { of: block.declared.of } : {}),
      key: block.key,
      unit: block.declared.unit,
      time: block.time,
      measured: block.measured,
      fitted,
      residual: block.measured.map((y, i) => y - fitted[i]),
      weight: problem.weight.slice(block.from, block.from + block.time.length),
    };
  });
}
