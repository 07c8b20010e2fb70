import type { Rule } from "./rule.js";
import { reachOf } from "./topology.js";

/** Feeds and outlets exist. */
export const feedsAndOutlets: Rule = (network, report) => {
  if (network.feeds.length === 0) report("no-feed", network.at, {});
  if (network.outlets.length === 0) report("no-outlet", network.at, {});
};

/** Every place has a way in and a way out, and all that enters ends in an outlet. Judged by topology, not by value. */
export const waysThrough: Rule = (network, report, { topology }) => {
  if (network.feeds.length === 0 || network.outlets.length === 0) return;
  const { fromFeeds, toOutlets } = reachOf(network, topology);
  const exchanged = new Set(network.compartments.flatMap((c) => c.exchanges.flatMap((e) => [c.name, e.partner])));
  const stuck: { name: string; at: (typeof network)["at"] }[] = [];
  for (const node of [...network.feeds, ...network.compartments]) {
    const i = topology.index.get(node.name) as number;
    const dead = "kind" in node && !node.kind.flows;
    if (dead) {
      if (node.streams.length > 0) report("dead-with-streams", node.at, { name: node.name });
      continue;
    }
    if (!fromFeeds[i]) report("unreachable", node.at, { name: node.name });
    else if (node.streams.length === 0 && !exchanged.has(node.name)) report("no-way-out", node.at, { name: node.name });
    else if (!toOutlets[i] && node.streams.length > 0) stuck.push(node);
  }
  // Where a stream ends nowhere the circle is not the fault.
  const lost = [...network.feeds, ...network.compartments].some((n) =>
    n.streams.some((s) => !topology.index.has(s.to)),
  );
  const noWay = network.compartments.some((c) => c.kind.flows && c.streams.length === 0 && !exchanged.has(c.name));
  if (stuck.length > 0 && !lost && !noWay) report("closed-loop", stuck[0].at, { names: stuck.map((n) => n.name) });
  for (const o of network.outlets) {
    if (!fromFeeds[topology.index.get(o.name) as number]) report("outlet-dry", o.at, { name: o.name });
  }
};
