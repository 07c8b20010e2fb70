import type { Rule } from "./rule.js";

/** Every inlet of a zoned body is entered, and every stream to one says by which inlet. */
export const zoneInlets: Rule = (network, report) => {
  const streams = [...network.feeds, ...network.compartments].flatMap((n) => n.streams);
  for (const { name, zones } of network.compartments) {
    if (!zones) continue;
    const known = zones.inlets.map((t) => t.name);
    const open = streams.filter((s) => s.to === name && s.enters === undefined);
    for (const s of open) report("zone-inlet-open", s.at, { name, known });
    if (open.length > 0) continue; // what it was to enter is not known
    for (const t of zones.inlets) {
      const entered = streams.some((s) => s.to === name && s.enters === t.name);
      if (!entered) report("zone-inlet", t.at, { name, inlet: t.name, known });
    }
  }
};
