import { evaluateNames } from "../compile/evaluate.js";
import { judgeAcross } from "../data/across-rules.js";
import { type AcrossTrials, acrossTrials } from "../data/across-trials.js";
import type { TrialOfDay } from "../data/contrast.js";
import type { Finding } from "../data/finding.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import { trialOn } from "../resolve/trial-on.js";
import { dimensions } from "../units/dimension.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import { vesselFacts } from "./trial-facts.js";

/** Tracer trials of one vessel held against one another, and what that says. */
export interface Across extends AcrossTrials {
  readonly findings: readonly Finding[];
  /** What was looked for and is not told, in words. */
  readonly notSupported: readonly string[];
}

/**
 * What the curves of several trials of a network say together, no model fitted: the network gives flows and volume of each day.
 * @returns undefined where no place was read in two trials
 */
export function acrossOf(network: Network, trials: readonly Trial[], seed: number): Across | undefined {
  const days = trials.filter((t) => !t.reacting).map((t) => dayOf(network, t));
  const across = days.length > 1 ? acrossTrials(days, seed) : undefined;
  if (!across) return undefined;
  const { findings, not } = judgeAcross(across, network.units.unitFor(dimensions.volume));
  return { ...across, findings, notSupported: not };
}

function dayOf(network: Network, declared: Trial): TrialOfDay {
  const trial = trialOn(network, declared);
  const names = new Map(network.names.map((n) => [n.name, n]));
  const env = evaluateNames(network);
  const said = [...trial.with].map(([name, value]): [string, string] => {
    const unit = value.unit ?? names.get(name)?.value.unit;
    const number = value.of(env);
    return [name, unit ? formatQuantity(number, unit) : formatNumber(number)];
  });
  return {
    trial,
    options: vesselFacts(network, declared),
    conditions: new Map([...said, ...(trial.conditions ?? [])]),
  };
}
