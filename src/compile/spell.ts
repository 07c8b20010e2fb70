import type { Block } from "../compartments/block.js";
import type { NodeMaker } from "../compartments/kind.js";
import type { Network } from "../model/network.js";
import { kindValues } from "./evaluate.js";
import type { Flows } from "./flows.js";
import { Part, type PlantNode } from "./plant.js";

/** Primitive nodes and the links between them, before totals are known. */
export interface Spelled {
  readonly nodes: readonly Omit<PlantNode, "inflow">[];
  readonly from: Int32Array;
  readonly to: Int32Array;
  readonly flow: Float64Array;
  readonly entry: ReadonlyMap<string, number>;
  readonly exit: ReadonlyMap<string, number>;
}

/** Lets every kind spell its compartments out; then lays streams and exchanges between them. */
export function spellOut(network: Network, env: Float64Array, flows: Flows): Spelled {
  const nodes: Omit<PlantNode, "inflow">[] = [];
  const from: number[] = [];
  const to: number[] = [];
  const flow: number[] = [];
  const entry = new Map<string, number>();
  const exit = new Map<string, number>();
  const link = (a: number, b: number, q: number) => {
    from.push(a);
    to.push(b);
    flow.push(q);
  };
  const exchange = (a: number, b: number, q: number) => {
    link(a, b, q);
    link(b, a, q);
  };
  const add = (name: string, part: PlantNode["part"], volume: number, block?: Block) =>
    nodes.push({ name, part, volume, ...(block ? { block } : {}) }) - 1;
  const joint = (name: string) => {
    const node = add(name, Part.Joint, 0);
    entry.set(name, node);
    exit.set(name, node);
  };
  for (const f of network.feeds) joint(f.name);
  network.compartments.forEach((c, i) => {
    const through = flows.through[network.feeds.length + i];
    const full = (suffix = "") => (suffix ? `${c.name}.${suffix}` : c.name);
    const maker: NodeMaker = {
      through,
      cell: (volume, suffix) => add(full(suffix), Part.Cell, volume),
      delay: (volume) => add(c.name, Part.Delay, volume),
      joint: () => add(c.name, Part.Joint, 0),
      block: (block) => add(c.name, Part.Block, block.volume + (block.pockets?.volume ?? 0), block),
      chain: (a, b) => link(a, b, through),
      exchange,
    };
    const ports = c.kind.spell(maker, kindValues(c, env));
    if (!ports) return;
    entry.set(c.name, ports.entry);
    exit.set(c.name, ports.exit);
    for (const m of ports.members) {
      entry.set(full(m.suffix), m.node);
      exit.set(full(m.suffix), m.node);
    }
  });
  for (const o of network.outlets) joint(o.name);
  const names = [...network.feeds, ...network.compartments, ...network.outlets].map((p) => p.name);
  for (const s of flows.streams) link(exit.get(names[s.from]) as number, entry.get(names[s.to]) as number, s.flow);
  for (const c of network.compartments) {
    for (const e of c.exchanges) {
      exchange(exit.get(c.name) as number, exit.get(e.partner) as number, e.flow.of(env));
    }
  }
  return { nodes, from: Int32Array.from(from), to: Int32Array.from(to), flow: Float64Array.from(flow), entry, exit };
}
