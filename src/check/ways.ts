import { isClosed, type Network } from "../model/network.js";
import { type Graph, reachable, stronglyConnected } from "../numerics/graph.js";
import type { Rule } from "./rule.js";

/** Feeds and outlets exist, or neither does: then the vessel is closed. */
export const feedsAndOutlets: Rule = (network, report) => {
  if (isClosed(network) && network.compartments.some((c) => c.kind.flows)) return;
  if (network.feeds.length === 0) report("no-feed", network.at, {});
  if (network.outlets.length === 0) report("no-outlet", network.at, {});
};

/**
 * Every place has a way in and a way out, and all that enters ends in an outlet. Judged by topology, not by value; said
 * where it begins, not again of all that lies behind.
 */
export const waysThrough: Rule = (network, report, { topology }) => {
  if (network.feeds.length === 0 || network.outlets.length === 0) return;
  if (topology.index.size < topology.names.length) return; // which of two is meant, who knows
  const nodes = [...network.feeds, ...network.compartments];
  const idle = network.feeds.filter((f) => f.streams.length === 0);
  for (const { name, at } of idle) report("no-way-out", at, { name, feed: true });
  if (idle.length > 0) return;
  const roots = network.feeds.map((f) => topology.index.get(f.name) as number);
  const seen = reachable(topology.ways, roots);
  const named = (group: readonly number[]) => group.map((i) => topology.names[i]);
  const inside = new Set(network.compartments.filter((c) => c.kind.flows).map((c) => topology.index.get(c.name)));
  // What may lead anywhere may lead there; an inlet of a part that nothing enters is told at the part.
  const inlets = new Set(network.groups.flatMap((g) => g.inlets));
  const unreached = groupsOf(topology.ways).filter(
    ({ members, entered }) =>
      topology.astray.size === 0 &&
      !entered &&
      members.every((i) => inside.has(i) && !seen[i]) &&
      !(members.length === 1 && inlets.has(topology.names[members[0]])),
  );
  for (const { members } of unreached) report("unreachable", placeOf(network, members[0]), { names: named(members) });
  const stuck = groupsOf(topology.streams).filter(
    ({ members, round, left }) =>
      round && !left && members.some((i) => seen[i]) && !members.some((i) => topology.astray.has(i)),
  );
  for (const { members } of stuck) report("closed-loop", placeOf(network, members[0]), { names: named(members) });
  const entered = new Set(nodes.flatMap((n) => n.streams.map((s) => s.to)));
  const ends = network.compartments.filter((c) => c.kind.flows && c.streams.length === 0 && entered.has(c.name));
  for (const { name, at } of ends) report("no-way-out", at, { name, feed: false });
  if (unreached.length + stuck.length + ends.length + topology.astray.size > 0) return;
  const wet = reachable(topology.streams, roots);
  for (const o of network.outlets) {
    if (!wet[topology.index.get(o.name) as number]) report("outlet-dry", o.at, { name: o.name });
  }
};

/** A closed vessel hangs together, and what streams bring to a place has a way out. Flows are held to each other elsewhere. */
export const closedVessel: Rule = (network, report, { topology }) => {
  if (!isClosed(network)) return;
  const flowing = network.compartments.filter((c) => c.kind.flows);
  const entered = new Set(flowing.flatMap((c) => c.streams.map((s) => s.to)));
  for (const { name, at, streams } of flowing) {
    if (streams.length === 0 && entered.has(name)) report("no-way-out", at, { name, feed: false });
  }
  const { size, from, to } = topology.ways;
  const bothWays = {
    size,
    from: [...Array.from(from), ...Array.from(to)],
    to: [...Array.from(to), ...Array.from(from)],
  };
  const reached = reachable(bothWays, [topology.index.get(flowing[0]?.name ?? "") ?? 0]);
  const apart = flowing.filter((c) => !reached[topology.index.get(c.name) as number]);
  if (apart.length > 0 && topology.astray.size === 0)
    report("closed-apart", apart[0].at, { names: apart.map((c) => c.name), from: flowing[0].name });
};

/** By index in the topology: feeds, compartments, outlets. */
const placeOf = (network: Network, i: number): Network["at"] =>
  [...network.feeds, ...network.compartments, ...network.outlets][i].at;

/** Places that can reach one another; has the group edges from elsewhere, to elsewhere, within? */
interface Group {
  /** In file order. */
  readonly members: readonly number[];
  entered: boolean;
  left: boolean;
  round: boolean;
}

function groupsOf(graph: Graph): Group[] {
  const groups = stronglyConnected(graph).map(
    (g): Group => ({ members: [...g].sort((a, b) => a - b), entered: false, left: false, round: false }),
  );
  const groupOf: Group[] = [];
  for (const group of groups) for (const i of group.members) groupOf[i] = group;
  for (let k = 0; k < graph.from.length; k++) {
    const [from, to] = [groupOf[graph.from[k]], groupOf[graph.to[k]]];
    if (from === to) from.round = true;
    else {
      from.left = true;
      to.entered = true;
    }
  }
  return groups;
}
