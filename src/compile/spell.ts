import type { Member, NodeMaker } from "../compartments/kind.js";
import type { Network } from "../model/network.js";
import { kindValues } from "./evaluate.js";
import type { Flows } from "./flows.js";
import { LinkList, NodeList, Places } from "./node-list.js";
import { Part } from "./plant.js";

/** Primitive nodes and the links between them, before totals are known. */
export interface Spelled {
  readonly nodes: NodeList;
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly flow: Float64Array;
  /** The link of the first stream; the others follow in file order. */
  readonly firstStream: number;
  readonly entry: ReadonlyMap<string, number>;
  readonly exit: ReadonlyMap<string, number>;
}

/** Lets every kind spell its compartments out; then lays streams and exchanges between them. */
export function spellOut(network: Network, env: Float64Array, flows: Flows): Spelled {
  const nodes = new NodeList();
  const links = new LinkList();
  const entry = new Places(nodes);
  const exit = new Places(nodes);
  const link = (a: number, b: number, q: number) => links.add(a, b, q);
  const exchange = (a: number, b: number, q: number) => {
    link(a, b, q);
    link(b, a, q);
  };
  const joint = (name: string) => {
    const node = nodes.add(name, Part.Joint, 0);
    entry.set(name, node);
    exit.set(name, node);
  };
  const brought = broughtToMembers(network, flows.streams);
  for (const f of network.feeds) joint(f.name);
  network.compartments.forEach((c, i) => {
    const through = flows.through[network.feeds.length + i];
    const full = (suffix = "") => (suffix ? `${c.name}.${suffix}` : c.name);
    const maker: NodeMaker = {
      through,
      brought: brought.get(network.feeds.length + i),
      cell: (volume, suffix) => nodes.add(full(suffix), Part.Cell, volume),
      delay: (volume) => nodes.add(c.name, Part.Delay, volume),
      joint: (suffix) => nodes.add(full(suffix), Part.Joint, 0),
      block: (block) => nodes.add(c.name, Part.Block, block.volume + (block.pockets?.volume ?? 0), block),
      chain: (a, b, flow = through) => link(a, b, flow),
      exchange,
      cells: (volume, names) => nodes.addCells(volume, `${c.name}.`, names),
      links: (a, b, q) => links.addAll(a, b, q),
    };
    const ports = c.kind.spell(maker, { ...kindValues(c, env), zones: flows.zoned.get(i)?.() });
    if (!ports) return;
    const know = (places: Places, members: readonly Member[] = []) => {
      for (const m of members) places.set(full(m.suffix), m.node);
    };
    if (ports.entry !== undefined) entry.set(c.name, ports.entry);
    if (ports.exit !== undefined) exit.set(c.name, ports.exit);
    know(entry, ports.members);
    know(exit, ports.members);
    know(entry, ports.inlets);
    know(exit, ports.outlets);
  });
  for (const o of network.outlets) joint(o.name);
  const names = [...network.feeds, ...network.compartments, ...network.outlets].map((p) => p.name);
  const port = (name: string, terminal: string | undefined) => (terminal === undefined ? name : `${name}.${terminal}`);
  const firstStream = links.count;
  for (const { from, to, flow, stream } of flows.streams) {
    const a = exit.get(port(names[from], stream.leaves)) as number;
    link(a, entry.get(port(names[to], stream.enters)) as number, flow);
  }
  for (const c of network.compartments) {
    for (const e of c.exchanges) {
      exchange(exit.get(c.name) as number, exit.get(e.partner) as number, e.flow.of(env));
    }
  }
  for (const { name, inlets, outlets } of network.groups) {
    const [way, out] = [entry.get(inlets[0]), exit.get(outlets[0])];
    if (inlets.length === 1 && way !== undefined) entry.set(name, way);
    if (outlets.length === 1 && out !== undefined) exit.set(name, out);
  }
  return { nodes, ...links.columns, firstStream, entry, exit };
}

/** By place, what streams bring to each member of a body where one of them enters past the first. */
export function broughtToMembers(network: Network, streams: Flows["streams"]): Map<number, Map<string, number>> {
  const brought = new Map<number, Map<string, number>>();
  const bodyAt = (place: number) => network.compartments[place - network.feeds.length];
  for (const { to, stream } of streams) {
    if (stream.enters !== undefined && !bodyAt(to)?.zones) brought.set(to, new Map());
  }
  for (const { to, flow, stream } of brought.size > 0 ? streams : []) {
    const members = brought.get(to);
    const suffix = stream.enters ?? "";
    members?.set(suffix, (members.get(suffix) ?? 0) + flow);
  }
  return brought;
}
