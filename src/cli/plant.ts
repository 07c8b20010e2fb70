import { compile } from "../compile/compile.js";
import type { Plant, Settings } from "../compile/plant.js";
import type { Network } from "../model/network.js";
import { InputError } from "./outcome.js";

/**
 * A plant at the given values.
 * @throws InputError where they make a volume or flow impossible
 */
export function plantAt(network: Network, settings: Settings): Plant {
  const { plant, problems } = compile(network, settings);
  if (!plant) throw new InputError(problems);
  return plant;
}
