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
  /** Places from which something leads where nobody can tell. */
  readonly astray: ReadonlySet<number>;
}

/** A place from which something leads to an end that does not exist, which another check tells, is astray. */
export function topologyOf(network: Network): Topology {
  const names = [...network.feeds, ...network.compartments, ...network.outlets].map((n) => n.name);
  const index = new Map(names.map((n, i) => [n, i]));
  const from: number[] = [];
  const to: number[] = [];
  const astray = new Set<number>();
  for (const node of [...network.feeds, ...network.compartments]) {
    const me = index.get(node.name) as number;
    for (const s of node.streams) {
      const target = s.unknown ? undefined : index.get(s.to);
      if (target === undefined) astray.add(me);
      else {
        from.push(me);
        to.push(target);
      }
    }
  }
  const bothFrom = [...from];
  const bothTo = [...to];
  for (const c of network.compartments) {
    for (const e of c.exchanges) {
      const me = index.get(c.name) as number;
      const partner = index.get(memberOf(network.compartments, e.partner)?.name ?? e.partner);
      if (partner === undefined) astray.add(me);
      else {
        bothFrom.push(me, partner);
        bothTo.push(partner, me);
      }
    }
  }
  const size = names.length;
  return { names, index, streams: { size, from, to }, ways: { size, from: bothFrom, to: bothTo }, astray };
}
