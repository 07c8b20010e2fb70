import type { Compartment, Network } from "../model/network.js";
import type { Value } from "../model/value.js";

/** What of a network may change with some of its values. */
export interface Affected {
  /** Those whose own values or exchanges do. */
  readonly compartments: readonly Compartment[];
  /** Do shares, fixed flows or feeds? */
  readonly flows: boolean;
}

/** Tells of names what they have a part in, directly or by other names. */
export function affectedBy(network: Network): (names: readonly string[]) => Affected {
  const users = new Map<string, string[]>();
  for (const { name, value } of network.names) {
    for (const used of value.uses) {
      const known = users.get(used);
      if (known) known.push(name);
      else users.set(used, [name]);
    }
  }
  const places = [...network.feeds, ...network.compartments];
  const streams = places.flatMap((p) => p.streams.flatMap(({ split }) => ("value" in split ? [split.value] : [])));
  const flows = [...network.feeds.map((f) => `${f.name}.flow`), ...streams.flatMap((v) => v.uses)];
  const usedBy = new Map<string, Set<Compartment>>();
  const note = (value: Value, c: Compartment): void => {
    for (const name of value.uses) usedBy.set(name, (usedBy.get(name) ?? new Set()).add(c));
  };
  for (const c of network.compartments) {
    for (const value of Object.values(c.values)) note(value, c);
    for (const { flow } of c.exchanges) note(flow, c);
  }
  const inFlows = new Set(flows);
  return (names) => {
    const reached = new Set(names);
    for (const name of reached) for (const user of users.get(name) ?? []) reached.add(user);
    const compartments = new Set([...reached].flatMap((name) => [...(usedBy.get(name) ?? [])]));
    return { compartments: [...compartments], flows: [...reached].some((name) => inFlows.has(name)) };
  };
}
