import type { Block } from "../compartments/block.js";
import type { KindValues, NodeMaker } from "../compartments/kind.js";
import type { Compartment } from "../model/network.js";
import { Part } from "./part.js";

/** Nodes and links that a compartment spells itself out in. */
export interface Spelled {
  readonly part: number[];
  readonly volume: number[];
  readonly flow: number[];
  /** Of its blocks, one after another: volume, pockets, shape. */
  readonly blocks: number[];
  /** How many numbers each block has in `blocks`, by node. */
  readonly counts: ReadonlyMap<number, number>;
}

/** Lets a compartment spell itself out, and keeps the numbers alone. */
export function spell(c: Compartment, of: KindValues, through: number, brought: NodeMaker["brought"]): Spelled {
  const part: number[] = [];
  const volume: number[] = [];
  const flow: number[] = [];
  const blocks: number[] = [];
  const counts = new Map<number, number>();
  const node = (sort: number, v: number): number => {
    part.push(sort);
    return volume.push(v) - 1;
  };
  const maker: NodeMaker = {
    through,
    brought,
    cell: (v) => node(Part.Cell, v),
    delay: (v) => node(Part.Delay, v),
    joint: () => node(Part.Joint, 0),
    block: (block: Block) => {
      const { volume: own, pockets, shape } = block;
      const added = node(Part.Block, own + (pockets?.volume ?? 0));
      blocks.push(own, pockets?.volume ?? 0, pockets?.exchange ?? 0, ...shape);
      counts.set(added, 3 + shape.length);
      return added;
    },
    chain: (_a, _b, q = through) => flow.push(q),
    exchange: (_a, _b, q) => flow.push(q, q),
    cells: (volumes) => {
      const first = volume.length;
      for (const v of volumes) node(v > 0 ? Part.Cell : Part.Joint, v);
      return first;
    },
    links: (_from, _to, q) => {
      for (const x of q) flow.push(x);
    },
  };
  c.kind.spell(maker, of);
  return { part, volume, flow, blocks, counts };
}
