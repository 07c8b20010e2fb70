import { memberOf } from "../model/members.js";
import type { Network } from "../model/network.js";
import type { Graph } from "../numerics/graph.js";

/** The places of a network as a graph: feeds, compartments, outlets in file order. Streams only, or exchanges too. */
export interface Topology {
  readonly names: readonly string[];
  readonly index: ReadonlyMap<string, number>;
  readonly streams: Graph;
  /** Streams, and every exchange both ways. */
  readonly ways: Graph;
}

/** Streams to places that do not exist are left out: another check names them. */
export function topologyOf(network: Network): Topology {
  const names = [...network.feeds, ...network.compartments, ...network.outlets].map((n) => n.name);
  const index = new Map(names.map((n, i) => [n, i]));
  const from: number[] = [];
  const to: number[] = [];
  for (const node of [...network.feeds, ...network.compartments]) {
    for (const s of node.streams) {
      const target = index.get(s.to);
      if (target !== undefined) {
        from.push(index.get(node.name) as number);
        to.push(target);
      }
    }
  }
  const bothFrom = [...from];
  const bothTo = [...to];
  for (const c of network.compartments) {
    for (const e of c.exchanges) {
      const partner = index.get(e.partner) ?? index.get(memberOf(network.compartments, e.partner)?.name ?? "");
      if (partner === undefined) continue;
      const me = index.get(c.name) as number;
      bothFrom.push(me, partner);
      bothTo.push(partner, me);
    }
  }
  const size = names.length;
  return { names, index, streams: { size, from, to }, ways: { size, from: bothFrom, to: bothTo } };
}
