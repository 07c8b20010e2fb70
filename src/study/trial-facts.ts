import { compile } from "../compile/compile.js";
import type { MomentsOptions } from "../data/moments.js";
import type { Network } from "../model/network.js";
import type { Study } from "../model/study.js";
import type { Trial } from "../model/trial.js";

/** What the log alone cannot know: flow and volume of the vessel on the day, from the first rival that can tell. */
export function momentsFacts(study: Study, trial: Trial): MomentsOptions {
  const network = study.rivals[0]?.network;
  return network ? vesselFacts(network, trial) : {};
}

/**
 * Flow at every place, whole flow and volume of a network on the day of a trial, with their declared standard
 * deviations (one feed's flow stands for all its streams).
 */
export function vesselFacts(network: Network, trial: Trial): MomentsOptions {
  const flows = Object.fromEntries([...trial.flows].map(([feed, flow]) => [`${feed}.flow`, flow.of([])]));
  const constants = Object.fromEntries([...trial.with].map(([name, value]) => [name, value.of([])]));
  const { plant } = compile(network, { ...flows, ...constants });
  if (!plant) return {};
  const throughflow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const spread = Math.hypot(
    ...network.feeds.map((f) => trial.flows.get(f.name)?.sd?.([]) ?? f.flow.sd?.(plant.env) ?? 0),
  );
  const relative = spread / throughflow;
  const known = (value: number, share: number) => (share > 0 ? { value, sd: value * share } : { value });
  const total = network.names.find((n) => n.role === "constant" && n.value.of(plant.env) === plant.volume.total);
  const volumeSd = total?.value.sd?.(plant.env) ?? 0;
  return {
    flowAt: (at) => {
      const outlet = plant.outlets.find((o) => o.name === at);
      const node = plant.exit.get(at);
      const flow = outlet?.flow ?? (node === undefined ? undefined : plant.nodes[node].inflow);
      return flow === undefined ? undefined : known(flow, relative);
    },
    throughflow: known(throughflow, relative),
    volume: known(plant.volume.total, volumeSd / plant.volume.total),
  };
}
