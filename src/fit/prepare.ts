import { evaluateNames } from "../compile/evaluate.js";
import type { Named, Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Env } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import { type Coordinate, coordinateOf } from "./coordinates.js";
import type { ForwardModel } from "./forward.js";
import { heldFacts, uncertainConstants } from "./held.js";
import { type Block, blocksOf, countOf } from "./observations.js";
import type { Setup } from "./setup.js";

/**
 * Gathers what a fit needs.
 * @param free  names of the parameters to estimate; undefined: all
 * @param asItStands  a network without parameters is no fault: it is compared with the data as it stands
 * @returns undefined, with the reason reported, where there is nothing to fit, or nothing to fit to
 */
export function prepare(
  model: ForwardModel,
  network: Network,
  trials: readonly Trial[],
  free: readonly string[] | undefined,
  report: Report,
  asItStands = false,
): Setup | undefined {
  const parameters = freeParameters(network, free, report, asItStands);
  if (!parameters) return undefined;
  const blocks = blocksOf(trials);
  const observations = countOf(blocks);
  if (observations === 0) {
    report("no-points", trials[0]?.at ?? network.at, { trials: trials.length });
    return undefined;
  }
  const env = evaluateNames(network, {});
  const coordinates = parameters.flatMap((p) => coordinatesOf(network, p, env, trials, blocks));
  const names = new Set(parameters.map((p) => p.name));
  const held = heldFacts(network, trials, names, env);
  const constants = uncertainConstants(network, trials, env);
  const cost = { evaluations: 0 };
  model.keep?.(trials);
  return { network, env, trials, coordinates, held, constants, blocks, observations, model, cost };
}

/** One for all trials, or one for each that has points. */
function coordinatesOf(
  network: Network,
  named: Named,
  env: Env,
  trials: readonly Trial[],
  blocks: readonly Block[],
): Coordinate[] {
  const one = coordinateOf(network, named, env);
  const read = [...new Set(blocks.map((b) => b.trial))];
  if (!named.perTrial || read.length < 2) return [one];
  const titles = read.map((k) => trials[k].title);
  return read.map((trial, i) => {
    const twins = titles.slice(0, i).filter((t) => t === titles[i]).length;
    const title = twins > 0 ? `${titles[i]} (${twins + 1})` : titles[i];
    return { ...one, name: `${title}/${named.name}`, trial };
  });
}

function freeParameters(
  network: Network,
  free: readonly string[] | undefined,
  report: Report,
  asItStands: boolean,
): Named[] | undefined {
  const all = network.names.filter((n) => n.role === "parameter");
  const names = all.map((n) => n.name);
  const unknown = (free ?? []).filter((name) => !names.includes(name));
  for (const name of unknown) report("unknown-free", network.at, { name, nearest: nearest(name, names), names });
  if (unknown.length > 0) return undefined;
  const chosen = free ? all.filter((n) => free.includes(n.name)) : all;
  if (chosen.length > 0 || asItStands) return chosen;
  report("nothing-to-fit", network.at, {});
  return undefined;
}
