import type { Value } from "../model/value.js";
import type { Span } from "../text/source.js";
import type { Rule } from "./rule.js";

/** Every value can be computed at the start values. What is made of a name that cannot is not told again. */
export const finiteValues: Rule = (network, report, { env }) => {
  const bad = new Set<string>();
  const streams = [...network.feeds, ...network.compartments].flatMap((n) => n.streams);
  const blind = streams.some(({ split }) => "value" in split && split.value.unknown);
  const look = (what: string, value: Value, at: Span = value.at): boolean => {
    const x = value.of(env);
    if (Number.isFinite(x)) return true;
    if (value.unknown) return false;
    if (!value.uses.some((name) => bad.has(name))) report("not-finite", at, { what, infinite: !Number.isNaN(x) });
    return false;
  };
  const bySlot = new Map(network.names.map((n) => [n.slot, n]));
  for (const slot of network.order) {
    const n = bySlot.get(slot);
    if (!n) continue;
    const what =
      n.role === "inflow"
        ? `the flow into '${n.name.replace(/\.flow$/, "")}'`
        : n.role === "feed-flow"
          ? `the flow of '${n.name.replace(/\.flow$/, "")}'`
          : `'${n.name}'`;
    // Flows into parts are made of the streams on their way.
    if (n.role === "inflow" && blind) bad.add(n.name);
    else if (!look(what, n.value)) bad.add(n.name);
    for (const bound of n.between ?? []) look(`a bound of '${n.name}'`, bound);
  }
  for (const c of network.compartments) {
    for (const [key, value] of Object.entries(c.values)) look(`the ${key} of '${c.name}'`, value);
    for (const e of c.exchanges) look(`the flow between '${c.name}' and '${e.partner}'`, e.flow);
  }
  for (const node of [...network.feeds, ...network.compartments]) {
    for (const { split, to, carries } of node.streams) {
      for (const [of, part] of carries ?? []) {
        if (part !== "rest") look(`the share of '${of}' from '${node.name}' to '${to}'`, part);
      }
      if ("value" in split) look(`the ${split.is} from '${node.name}' to '${to}'`, split.value);
    }
  }
};
