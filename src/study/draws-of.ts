import { compile } from "../compile/compile.js";
import type { Settings } from "../compile/plant.js";
import type { Fit } from "../fit/result.js";
import { parameterDraws } from "./draws.js";
import type { Ranked } from "./result.js";

/** Parameter sets that a fit leaves possible, shared by all duties and changes of a rival. */
export interface RivalDraws {
  readonly settings: readonly Settings[];
}

/** Draws for a ranked rival that has a fit; a set counts where it makes a vessel and keeps every `requires:`. */
export function drawsOf(ranked: Ranked, count: number, seed: number): RivalDraws {
  const { network } = ranked.rival;
  const possible = (settings: Settings): boolean => {
    const { plant } = compile(network, settings);
    return plant !== undefined && network.requires.every((r) => r.slack(plant.env) > 0);
  };
  return { settings: parameterDraws(network, ranked.fit as Fit, count, seed, possible) };
}
