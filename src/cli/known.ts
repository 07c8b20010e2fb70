import { compile } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import { broughtTo } from "../compile/through.js";
import type { Known } from "../data/figure.js";
import { settingsOfDay, shifted } from "../fit/settings.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";

/**
 * A figure of the vessel on the day of a trial, with the spread that the declared `±` of constants, parameters and
 * flows give it (each moved by one standard deviation, squares added).
 */
export function knownOnDay(network: Network, trial: Trial, of: (plant: Plant) => number): Known {
  const at = (day: Trial, values: Record<string, number> = {}): number => {
    const { plant } = compile(network, settingsOfDay(network, day, values));
    return plant ? of(plant) : Number.NaN;
  };
  const value = at(trial);
  const env = evaluateNames(network, settingsOfDay(network, trial, {}));
  const ofNames = network.names
    .filter(
      (n) => !(n.role === "feed-flow" && trial.flows.has(n.name.replace(/\.flow$/, ""))) && !trial.with.has(n.name),
    )
    .flatMap((n) => {
      const sd = n.value.sd?.(env) ?? 0;
      return sd > 0 ? [at(trial, { [n.name]: env[n.slot] + sd }) - value] : [];
    });
  const ofFlows = [...trial.flows].flatMap(([feed, flow]) => {
    const sd = flow.sd?.(env) ?? 0;
    return sd > 0 ? [at({ ...trial, flows: new Map(trial.flows).set(feed, shifted(flow, sd)) }) - value] : [];
  });
  const changes = [...ofNames, ...ofFlows].filter(Number.isFinite);
  return changes.length > 0 ? { value, sd: Math.hypot(...changes) } : { value };
}

/** Flow through a place: all streams that enter or leave it, exchange left out. m3/s. */
export function flowThrough(plant: Plant, name: string): number {
  const port = [...plant.outlets, ...plant.feeds].find((p) => p.name === name);
  if (port) return port.flow;
  return broughtTo(plant, plant.network.groups.find((g) => g.name === name)?.outlets[0] ?? name);
}
