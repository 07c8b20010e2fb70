import type { KindValues } from "../compartments/kind.js";
import type { Compartment, Network } from "../model/network.js";
import { isRatio } from "../units/dimension.js";
import type { Settings } from "./plant.js";

/** Values of all names, SI, one slot each: the file's own, or those in `settings`. */
export function evaluateNames(network: Pick<Network, "names" | "order">, settings: Settings = {}): Float64Array {
  const env = new Float64Array(network.names.reduce((size, n) => Math.max(size, n.slot + 1), 0));
  for (const slot of network.order) {
    const n = network.names[slot]?.slot === slot ? network.names[slot] : network.names.find((m) => m.slot === slot);
    if (n) env[slot] = settings[n.name] ?? n.value.of(env);
  }
  return env;
}

/** The keys of a compartment, evaluated. */
export function kindValues(c: Compartment, env: ArrayLike<number>): KindValues {
  const values: Record<string, number> = {};
  const shares = new Set<string>();
  for (const key in c.values) {
    values[key] = c.values[key].of(env);
    if (isRatio(c.values[key].dimension)) shares.add(key);
  }
  return { values, counts: c.counts, words: c.words, shares, zones: c.zones };
}
