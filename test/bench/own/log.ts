import { compile, type FitOutcome, fit, parseNetwork, parseTrial } from "../../../src/index.js";
import { truth } from "../log-trial.js";
import { fileOf, repeated, wanted } from "./load.js";

/** A fit again and again in one process: network, trial. */
export function log([network, trial]: string[]): Record<string, unknown> {
  const { outcome, first, again } = fitAgain(network, trial);
  const found = outcome.fit;
  if (!found) throw new Error(outcome.problems.map((p) => p.message).join("; "));
  const si: Readonly<Record<string, number>> = { bypass: 1, riser: 1e-3, stagnant: 1e-3, renewal: 1e-3 / 60 };
  const deviations = Object.entries(truth).map(([name, value]) => {
    const p = found.parameters.find((q) => q.name === name);
    return p?.standardError ? Math.abs(p.value - value * si[name]) / p.standardError : Number.NaN;
  });
  return { first_s: first, solve_s: again, deviations: Math.max(...deviations), ssr: found.residualSumOfSquares };
}

/** Reads, compiles and fits; seconds of the first fit and of `least` or more later ones, their median. */
export function fitAgain(
  network: string,
  trial: string,
  least = 3,
): { outcome: FitOutcome; first: number; again: number } {
  const net = fileOf(network);
  const { plant } = compile(wanted(parseNetwork(net.text, net.options)));
  if (!plant) throw new Error("the network does not compile");
  const test = fileOf(trial);
  const read = wanted(parseTrial(test.text, test.options));
  const { first, again, result } = repeated(() => fit(plant, [read]), least);
  return { outcome: result, first, again };
}
