import { compile } from "../compile/compile.js";
import type { Settings } from "../compile/plant.js";
import type { Fit } from "../fit/result.js";
import type { Network } from "../model/network.js";
import { parameterDraws } from "./draws.js";

/** Parameter sets that a fit leaves possible, shared by all duties and changes of a rival. */
export interface RivalDraws {
  readonly settings: readonly Settings[];
}

/** Draws for a network with or without a fit; a set counts where it makes a vessel and keeps every `requires:`. */
export function drawsOf(network: Network, fit: Fit | undefined, count: number, seed: number): RivalDraws {
  const possible = (settings: Settings): boolean => {
    const { plant } = compile(network, settings);
    return plant !== undefined && network.requires.every((r) => r.slack(plant.env) > 0);
  };
  return { settings: parameterDraws(network, fit, count, seed, possible) };
}
