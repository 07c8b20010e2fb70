import { linearTheory } from "../fit/covariance.js";
import type { ForwardModel } from "../fit/forward.js";
import { fullJacobian } from "../fit/jacobian.js";
import { modelOf } from "../fit/model-of.js";
import { type Block, thinned } from "../fit/observations.js";
import { prepare } from "../fit/prepare.js";
import { problemWith } from "../fit/problem.js";
import type { Fit } from "../fit/result.js";
import { priorsOf } from "../fit/settle.js";
import type { Setup } from "../fit/setup.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { studentTQuantile } from "../numerics/distributions.js";
import { collector } from "../problems/report.js";
import { trialOn } from "../resolve/trial-on.js";
import type { Unit } from "../units/unit.js";
import { type Candidate, candidatesFor } from "./candidates.js";
import { asLogged } from "./expected.js";
import { plannedNoise } from "./noise.js";

/** What one more test would make of the parameters, the trials that there are still counted. */
export interface FurtherTest {
  readonly says: string;
  readonly sort: Candidate["sort"];
  readonly parameters: readonly FurtherParameter[];
  /** Geometric mean over the parameters asked for of the new width of their intervals over the present one, or over the bounds where there is none. */
  readonly remains: number;
}

/** SI; 95 %, cut at the bounds. */
export interface FurtherParameter {
  readonly name: string;
  readonly unit: Unit;
  readonly now: readonly [number, number] | undefined;
  readonly after: readonly [number, number] | undefined;
}

/** Points of the present trials that are looked at, and of a further test. */
const most = 400;

/**
 * Ranks further tests by how far they would narrow the intervals of parameters that the trials at hand tell badly: by linear
 * theory at the fitted values, with the scatter that the fit found. A test that would tell them best comes first; what changes
 * nothing is left out.
 * @param about  the parameters asked about; default: all
 */
export function furtherTests(
  vessel: Network,
  declared: readonly Trial[],
  fit: Fit,
  about: readonly string[] = fit.parameters.map((p) => p.name),
  free?: readonly string[],
): FurtherTest[] {
  const { model, whole: network } = modelOf(vessel, declared);
  const trials = declared.map((t) => trialOn(network, t));
  const now = widthsOf(model, network, trials, fit, undefined, free);
  if (!now) return [];
  const asked = about.filter((name) => now.has(name));
  if (asked.length === 0) return [];
  const tests = candidatesFor(network, trials, fit).flatMap((candidate): FurtherTest[] => {
    const after = widthsOf(model, network, trials, fit, candidate, free);
    if (!after) return [];
    const remains = Math.exp(
      asked.reduce((sum, name) => sum + Math.log(widthOf(after.get(name)) / widthOf(now.get(name))), 0) / asked.length,
    );
    const parameters = asked.map((name): FurtherParameter => {
      const [a, b] = [now.get(name), after.get(name)] as [Known, Known];
      return { name, unit: a.unit, now: a.interval, after: b.interval };
    });
    return [{ says: candidate.says, sort: candidate.sort, parameters, remains }];
  });
  return tests.filter((t) => t.remains < 0.95).sort((a, b) => a.remains - b.remains);
}

interface Known {
  readonly unit: Unit;
  readonly interval: readonly [number, number] | undefined;
  /** That of the interval; of the bounds, or of ten times the value, where the data tell nothing. */
  readonly width: number;
}

const widthOf = (known: Known | undefined): number => known?.width || 1e-300;

/** Expected intervals of all parameters, from the trials and one more. */
function widthsOf(
  model: ForwardModel,
  network: Network,
  trials: readonly Trial[],
  fit: Fit,
  candidate: Candidate | undefined,
  free: readonly string[] | undefined,
): Map<string, Known> | undefined {
  const { report } = collector();
  const logged = candidate && loggedAt(model, candidate, fit);
  if (candidate && !logged) return undefined;
  const whole = prepare(model, network, logged ? [...trials, logged] : trials, free, report, true);
  if (!whole || whole.coordinates.length === 0) return undefined;
  const setup = thin(whole);
  const weight = weightsOf(setup, whole, trials.length, fit, candidate);
  const problem = problemWith(setup, weight, priorsOf(setup, 1));
  const x = new Float64Array(setup.coordinates.length + setup.held.length);
  setup.coordinates.forEach((c, j) => {
    x[j] = c.fromSi(fit.values[c.name] ?? fit.values[`${trials[0].title}/${c.named.name}`] ?? c.start);
  });
  const at = problem.evaluate(x);
  if (!at) return undefined;
  const columns = fullJacobian(problem, x, at);
  const signal = Math.sqrt(
    setup.blocks.reduce((sum, b) => sum + b.measured.reduce((s, y, i) => s + (y * weight[b.from + i]) ** 2, 0), 0),
  );
  const theory = linearTheory(
    columns,
    columns.map((_, j) => (j < x.length ? 1e-6 * signal : 0)),
  );
  const t = fit.freedom > 0 ? studentTQuantile(0.975, fit.freedom) : 1.96;
  return new Map(
    setup.coordinates.map((c, j): [string, Known] => {
      const sd = Math.sqrt(theory.inverse[j * theory.n + j]) * Math.abs(c.slope(x[j]));
      const value = c.toSi(x[j]);
      const low = Math.max(c.lower, value - t * sd);
      const high = Math.min(c.upper, value + t * sd);
      const told = Number.isFinite(low) && Number.isFinite(high);
      const bounds = Number.isFinite(c.upper - c.lower) ? c.upper - c.lower : 10 * Math.abs(value);
      return [c.name, { unit: c.unit, interval: told ? [low, high] : undefined, width: told ? high - low : bounds }];
    }),
  );
}

/** The further test with what the fitted vessel would show. */
function loggedAt(model: ForwardModel, { trial, times }: Candidate, fit: Fit): Trial | undefined {
  const curves = model.respond(
    trial,
    fit.values,
    times.map((time) => ({ time })),
  );
  return curves && asLogged(trial, times, curves);
}

function thin(setup: Setup): Setup {
  const blocks = thinned(setup.blocks, most);
  return blocks === setup.blocks
    ? setup
    : { ...setup, blocks, observations: blocks.reduce((n, b) => n + b.time.length, 0) };
}

/** 1 / standard deviation of each point: of the trials as the fit weighed them, of a further one as its like. */
function weightsOf(
  setup: Setup,
  whole: Setup,
  trials: number,
  fit: Fit,
  candidate: Candidate | undefined,
): Float64Array {
  const freedom = Math.max(1, fit.observations - fit.freeParameters);
  const spread = Math.sqrt(fit.residualSumOfSquares / freedom) || 1;
  const weight = new Float64Array(setup.observations);
  setup.blocks.forEach((b, k) => {
    const share = Math.sqrt(whole.blocks[k].time.length / b.time.length);
    const of = b.trial < trials ? fit.readings[k]?.weight : undefined;
    const sd = of ? undefined : candidateNoise(b, fit, candidate);
    for (let i = 0; i < b.time.length; i++) {
      const own = of ? of[placeIn(whole.blocks[k], b.time[i])] / spread : 1 / (sd?.(b.measured[i]) ?? 1);
      weight[b.from + i] = own * share;
    }
  });
  return weight;
}

/** Place of a time among ascending ones. */
function placeIn({ time }: Block, t: number): number {
  let [low, high] = [0, time.length - 1];
  while (low < high) {
    const middle = (low + high) >> 1;
    if (time[middle] < t) low = middle + 1;
    else high = middle;
  }
  return low;
}

function candidateNoise(b: Block, fit: Fit, candidate: Candidate | undefined): (c: number) => number {
  const peak = b.measured.reduce((m, c) => Math.max(m, Math.abs(c)), 0);
  if (b.declared.noise) return plannedNoise(b.declared, peak).sd;
  const like = fit.readings[candidate?.like ?? 0];
  const square =
    like.residual.reduce((s, e) => s + e * e, 0) /
    Math.max(1, like.residual.length - fit.freeParameters / fit.readings.length);
  const sd = Math.sqrt(square) || 0.01 * peak;
  return () => sd;
}
