import { rowMeant } from "../model/members.js";
import type { Named } from "../model/network.js";
import { isRatio } from "../units/dimension.js";
import type { Rule } from "./rule.js";

/** Feeds, compartments and outlets share one set of names; every stream must go to one of them. */
export const placeNames: Rule = (network, report) => {
  const seen = new Map<string, { at: (typeof network)["at"]; as: string }>();
  const all = [
    ...network.feeds.map((n) => ({ ...n, as: "a feed" })),
    ...network.compartments.map((n) => ({ ...n, as: "a compartment" })),
    ...network.outlets.map((n) => ({ ...n, as: "an outlet" })),
  ];
  for (const { name, at, as } of all) {
    const earlier = seen.get(name);
    if (earlier) report("name-taken", at, { name, by: earlier.as }, { at: earlier.at, says: "declared first here" });
    else seen.set(name, { at, as });
  }
};

/** Every stream ends in a place that exists and may be entered. */
export const streamTargets: Rule = (network, report, { nearest }) => {
  const bodies = new Map(network.compartments.map((c) => [c.name, c]));
  const outlets = new Set(network.outlets.map((o) => o.name));
  const feeds = new Map(network.feeds.map((f) => [f.name, f]));
  for (const node of [...network.feeds, ...network.compartments]) {
    for (const s of node.streams) {
      if (s.unknown) continue;
      const feed = feeds.get(s.to);
      if (feed && !bodies.has(s.to) && !outlets.has(s.to)) {
        const into = feed.streams.length === 1 ? feed.streams[0].to : undefined;
        report("into-feed", s.at, { name: s.to, from: node.name, enters: into });
      } else if (!bodies.has(s.to) && !outlets.has(s.to)) {
        const inlets = network.compartments.flatMap((c) => c.zones?.inlets.map((t) => `${c.name}.${t.name}`) ?? []);
        const known = [...bodies.keys(), ...inlets, ...outlets];
        report("unknown-place", s.at, {
          name: s.to,
          wanted: "compartment or outlet",
          nearest: nearest(s.to, known),
          known,
          row: rowMeant(network.compartments, s.to),
        });
      } else if (bodies.get(s.to)?.kind.flows === false)
        report("dead-with-streams", s.at, { name: s.to, from: node.name });
    }
  }
};

/** A bare number from 1 on may be how far a body holds a tracer back, which a trial names in its `retained:`. */
const mayRetain = ({ value }: Named): boolean =>
  isRatio(value.dimension) && !value.unknown && value.uses.length === 0 && value.of([]) >= 1;

/** Constants and parameters that nothing uses. Those of a part are for its own file to answer for. */
export const unusedNames: Rule = (network, report) => {
  for (const n of network.names) {
    if (n.role === "feed-flow" || n.role === "inflow" || n.name.includes(".") || network.used.has(n.name)) continue;
    if (mayRetain(n)) continue;
    report("unused-name", n.at, { name: n.name, role: n.role });
  }
};
