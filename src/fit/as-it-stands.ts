import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { collector } from "../problems/report.js";
import { readingsOf } from "./fit.js";
import { modelOf } from "./model-of.js";
import { prepare } from "./prepare.js";
import { problemWith } from "./problem.js";
import type { FittedReading } from "./result.js";
import { weightsFor } from "./weights.js";

/**
 * The readings of a trial beside the curve of a network at the values of its file. Nothing is searched for; only the linear
 * terms that the trial leaves open (scale, baseline) are those that fit best.
 * @returns undefined where the trial has no readings, or the values make no vessel
 */
export function asItStands(network: Network, trial: Trial): readonly FittedReading[] | undefined {
  const { model, whole } = modelOf(network, [trial]);
  const setup = prepare(model, whole, [trial], [], collector().report, true);
  if (!setup) return undefined;
  const problem = problemWith(setup, weightsFor(setup).weight);
  const at = problem.evaluate(new Float64Array(0));
  return at && readingsOf(setup, { at, problem });
}
