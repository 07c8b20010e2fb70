/**
 * The library: `import { parseNetwork, compile, tracerResponse, fit, steadyState } from "backmix"`. A pure core: no file,
 * console or clock in it. All numbers are SI (m3, s, kg, mol, K) unless a docstring says otherwise.
 */
import type { Plant } from "./compile/plant.js";
import { type FitOptions, type FitOutcome, fit as fitNetwork } from "./fit/fit.js";
import type { Trial } from "./model/trial.js";
import { type NodeMoments, moments as nodeMoments } from "./simulate/moments.js";

export { compile } from "./compile/compile.js";
export type { Plant, Settings } from "./compile/plant.js";
export type { FitOptions, FitOutcome } from "./fit/fit.js";
export type { Fit } from "./fit/result.js";
export type { Chemistry } from "./model/chemistry.js";
export type { Duty } from "./model/duty.js";
export type { Network } from "./model/network.js";
export type { Study } from "./model/study.js";
export type { Trial } from "./model/trial.js";
export type { Complex } from "./numerics/complex.js";
export { type IntegrateOptions, type Integration, integrate } from "./numerics/integrate.js";
export { leastSquares } from "./numerics/least-squares.js";
export { parseChemistry } from "./parse/chemistry.js";
export { parseDuty } from "./parse/duty.js";
export { parseNetwork } from "./parse/network.js";
export type { Parsed, ParseOptions, Read } from "./parse/parsed.js";
export { parseStudy } from "./parse/study.js";
export { parseTrial } from "./parse/trial.js";
export { printProblems } from "./problems/print.js";
export type { Problem } from "./problems/problem.js";
export { type FoundState, type StatesFound, steadyStates } from "./reaction/states.js";
export { type SteadyState, steadyState } from "./reaction/steady.js";
export { meanAges, meanLives } from "./simulate/ages.js";
export { exact } from "./simulate/exact.js";
export { laplace } from "./simulate/laplace.js";
export { ode } from "./simulate/ode.js";
export {
  type TracerOptions,
  type TracerReading,
  type TracerResult,
  tracerResponse,
  type UnitInjection,
} from "./simulate/tracer.js";
export { transferFunction } from "./transfer/transfer-function.js";
export {
  type Transient,
  type TransientBalance,
  type TransientOptions,
  transient,
} from "./transient/transient.js";

/**
 * Fits the free parameters of the network that a plant was compiled from to tracer trials.
 * @see `FitOptions` for what may be set; the result is SI with the units of the file beside
 */
export function fit(plant: Plant, trials: readonly Trial[], options: FitOptions = {}): FitOutcome {
  return fitNetwork(plant.network, trials, options);
}

/**
 * Exact residence-time moments at every outlet, for tracer put into one feed (the first where none is named). s, s2.
 * @throws RangeError where there is no such feed
 */
export function moments(plant: Plant, feed = plant.feeds[0]?.name): Record<string, NodeMoments> {
  const entry = plant.feeds.find((f) => f.name === feed)?.node;
  if (entry === undefined) throw new RangeError(`no feed '${feed}' in the network`);
  const all = nodeMoments(plant, entry);
  return Object.fromEntries(plant.outlets.map((o) => [o.name, all[o.node]]));
}
