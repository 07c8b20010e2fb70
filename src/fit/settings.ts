import { evaluateNames } from "../compile/evaluate.js";
import type { Settings } from "../compile/plant.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Value } from "../model/value.js";
import { trialOn } from "../resolve/trial-on.js";

/** `values` with the flows and constants of the day of a trial laid over them, SI. */
export function settingsOfDay(network: Network, declared: Trial, values: Settings): Settings {
  const trial = trialOn(network, declared);
  if (trial.flows.size === 0 && trial.with.size === 0) return values;
  const env = evaluateNames(network, values);
  const day: Record<string, number> = { ...values };
  for (const [feed, flow] of trial.flows) day[`${feed}.flow`] = flow.of(env);
  for (const [name, value] of trial.with) day[name] = value.of(env);
  return day;
}

/** The same value, `by` (SI) larger, known exactly. */
export const shifted = (value: Value, by: number): Value => ({
  ...value,
  of: (env) => value.of(env) + by,
  sd: undefined,
});
