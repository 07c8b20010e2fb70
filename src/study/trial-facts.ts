import { compile } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import type { Plant, Settings } from "../compile/plant.js";
import { plantFollowing } from "../compile/sends.js";
import type { MomentsOptions } from "../data/moments.js";
import type { WayOut } from "../data/result.js";
import { isClosed, type Network } from "../model/network.js";
import type { Study } from "../model/study.js";
import type { Trial } from "../model/trial.js";
import { trialOn } from "../resolve/trial-on.js";
import { moments } from "../simulate/moments.js";
import { tracerPlant } from "../simulate/tracer-plant.js";
import { dimensions } from "../units/dimension.js";

/** What the log alone cannot know: flow and volume of the vessel on the day, from the first rival that can tell. */
export function momentsFacts(study: Study, trial: Trial): MomentsOptions {
  const network = study.rivals[0]?.network;
  return network ? vesselFacts(network, trial) : {};
}

/**
 * Flow at every place, whole flow and volume of a network on the day of a trial, with their declared standard
 * deviations (one feed's flow stands for all its streams).
 */
export function vesselFacts(network: Network, declared: Trial): MomentsOptions {
  const trial = trialOn(network, declared);
  const flows = Object.fromEntries([...trial.flows].map(([feed, flow]) => [`${feed}.flow`, flow.of([])]));
  const env = evaluateNames(network);
  const constants = Object.fromEntries([...trial.with].map(([name, value]) => [name, value.of(env)]));
  const { plant } = compile(network, { ...flows, ...constants });
  if (!plant) return {};
  const throughflow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const spread = Math.hypot(
    ...network.feeds.map((f) => trial.flows.get(f.name)?.sd?.([]) ?? f.flow.sd?.(plant.env) ?? 0),
  );
  const relative = spread / throughflow;
  const known = (value: number, share: number) => (share > 0 ? { value, sd: value * share } : { value });
  const retained = trial.tracer?.retained;
  const volume = retained ? tracerPlant(plant, { retained }).volume.total : plant.volume.total;
  const guessed = (of: (plant: Plant) => number) => hangsOnGuess(network, { ...flows, ...constants }, of);
  const total = network.names.find((n) => n.role === "constant" && n.value.of(plant.env) === plant.volume.total);
  const volumeSd = total?.value.sd?.(plant.env) ?? 0;
  return {
    flowAt: (at) => {
      const outlet = plant.outlets.find((o) => o.name === at);
      const node = plant.exit.get(at);
      const flow = outlet?.flow ?? (node === undefined ? undefined : plant.nodes[node].inflow);
      return flow === undefined ? undefined : known(flow, relative);
    },
    throughflow: guessed((p) => p.feeds.reduce((sum, f) => sum + f.flow, 0)) ? undefined : known(throughflow, relative),
    ...(guessed((p) => p.volume.total) ? { guessed: true } : { volume: known(volume, volumeSd / plant.volume.total) }),
    ...placesOf(plantFollowing(plant, trial.tracer?.follows?.of)),
  };
}

/**
 * Does a figure of the vessel hang on a parameter that a fit may move and of which nothing is known but where to begin? Such a
 * figure is no fact. A parameter with a `±` is one.
 */
export function hangsOnGuess(network: Network, settings: Settings, of: (plant: Plant) => number): boolean {
  const { plant } = compile(network, settings);
  if (!plant) return false;
  const value = of(plant);
  return network.names.some(({ name, slot, role, between, value: declared }) => {
    if (role !== "parameter" || !between || settings[name] !== undefined || declared.sd) return false;
    const here = plant.env[slot];
    // Not all of the way: other rules of the vessel may forbid its ends.
    return between.some((end) => {
      const other = compile(network, { ...settings, [name]: here + 0.01 * (end.of(plant.env) - here) }).plant;
      return other !== undefined && Math.abs(of(other) - value) > 1e-9 * Math.abs(value);
    });
  });
}

/** Feeds, ways out and the unit of volumes of a plant, for moments. */
export function placesOf(plant: Plant): Pick<MomentsOptions, "volumeUnit" | "feeds" | "wayOut" | "closed" | "follows"> {
  return {
    volumeUnit: plant.network.units.unitFor(dimensions.volume),
    closed: isClosed(plant),
    ...(plant.follows === undefined ? {} : { follows: plant.follows }),
    feeds: new Map(plant.feeds.map((f) => [f.name, f.flow])),
    wayOut: (at) => wayOutOf(plant, at),
  };
}

/** Share of what is fed that leaves by an outlet: of the liquid, or of the substance that the plant is of. */
function shareOf(plant: Plant, outlet: Plant["outlets"][number]): number {
  const whole = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  if (plant.follows === undefined) return outlet.flow / whole;
  return moments(plant, new Map(plant.feeds.map((f) => [f.node, f.flow / whole])))[outlet.node].share;
}

/** A place is a way out if it is an outlet, or the one body that an outlet takes all its liquid from. */
function wayOutOf(plant: Plant, at: string): WayOut {
  const whole = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const outlets = plant.outlets.filter((o) => o.flow > 1e-12 * whole);
  const into = (name: string) => plant.streams.filter((s) => s.to === name && s.flow > 0);
  const own = outlets.find((o) => o.name === at || into(o.name).every((s) => s.from === at));
  const others = outlets.filter((o) => o !== own).map((o) => o.name);
  return { isOutlet: own !== undefined, share: own ? shareOf(plant, own) : 0, others };
}
