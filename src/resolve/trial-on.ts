import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Value } from "../model/value.js";
import { collector, type Report } from "../problems/report.js";
import { resolveValue, type Scope } from "./value.js";

/** A trial on a network: what its `with:` says in names of that is bound to them. Faults are told to who checks the trial. */
export function trialOn(network: Network, trial: Trial): Trial {
  if (!trial.late || trial.late.size === 0) return trial;
  const { late, ...bound } = trial;
  return { ...bound, with: new Map([...trial.with, ...lateValues(network, trial, collector().report)]) };
}

/** Values of a `with:` that use names of a network; what cannot be bound is reported and left out. */
export function lateValues(network: Network, { late }: Trial, report: Report): Map<string, Value> {
  const named = new Map(network.names.map((n) => [n.name, n]));
  const scope: Scope = {
    slot: (name) => named.get(name)?.slot,
    dimension: (name) => named.get(name)?.value.dimension,
    unit: (name) => named.get(name)?.value.unit,
    scale: (name) => named.get(name)?.value.scale,
    names: () => [...named.keys()],
  };
  const values = new Map<string, Value>();
  for (const [name, node] of late ?? []) {
    const value = resolveValue(node, "any", scope, report);
    if (value) values.set(name, value);
  }
  return values;
}
