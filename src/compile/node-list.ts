import type { Block } from "../compartments/block.js";
import type { ZoneNames } from "../compartments/zone-table.js";
import { type NodeColumns, Part, type PlantNode } from "./plant.js";

/** Cells that stand in a row under names that their table keeps: `core.c17`. */
interface Range {
  readonly first: number;
  readonly count: number;
  readonly prefix: string;
  readonly names: ZoneNames;
}

/** Nodes as columns, filled one by one or many at a time: a million cells are no million objects. */
export class NodeList {
  size = 0;
  part = new Uint8Array(16);
  /** m3 */
  volume = new Float64Array(16);
  private readonly names: string[] = [];
  private readonly blocks = new Map<number, Block>();
  private readonly ranges: Range[] = [];

  add(name: string, part: PlantNode["part"], volume: number, block?: Block): number {
    const i = this.grow(1);
    this.part[i] = part;
    this.volume[i] = volume;
    this.names[i] = name;
    if (block) this.blocks.set(i, block);
    return i;
  }

  /** Stirred cells by their volumes; without one it is a joint. */
  addCells(volume: Float64Array, prefix: string, names: ZoneNames): number {
    const first = this.grow(volume.length);
    this.volume.set(volume, first);
    for (let i = 0; i < volume.length; i++) this.part[first + i] = volume[i] > 0 ? Part.Cell : Part.Joint;
    this.ranges.push({ first, count: volume.length, prefix, names });
    return first;
  }

  nameOf(i: number): string {
    const range = this.ranges.find((r) => i >= r.first && i < r.first + r.count);
    return range ? range.prefix + range.names.nameOf(i - range.first) : this.names[i];
  }

  blockAt(i: number): Block | undefined {
    return this.blocks.get(i);
  }

  /** The cell of a table by its whole name. */
  cellNamed(name: string): number | undefined {
    for (const { first, prefix, names } of this.ranges) {
      const cell = name.startsWith(prefix) ? names.numberOf(name.slice(prefix.length)) : -1;
      if (cell >= 0) return first + cell;
    }
    return undefined;
  }

  /** As objects. */
  nodes(inflow: Float64Array): PlantNode[] {
    return Array.from({ length: this.size }, (_, i): PlantNode => {
      const block = this.blocks.get(i);
      const part = this.part[i] as PlantNode["part"];
      return { name: this.nameOf(i), part, volume: this.volume[i], inflow: inflow[i], ...(block ? { block } : {}) };
    });
  }

  private grow(by: number): number {
    const first = this.size;
    this.size += by;
    if (this.size > this.part.length) {
      const length = Math.max(2 * this.part.length, this.size);
      const [part, volume] = [new Uint8Array(length), new Float64Array(length)];
      part.set(this.part);
      volume.set(this.volume);
      [this.part, this.volume] = [part, volume];
    }
    return first;
  }
}

/** The columns of nodes that are given as objects. */
export const columnsOf = (nodes: readonly PlantNode[]): NodeColumns => ({
  size: nodes.length,
  part: Uint8Array.from(nodes, (n) => n.part),
  volume: Float64Array.from(nodes, (n) => n.volume),
  inflow: Float64Array.from(nodes, (n) => n.inflow),
  nameOf: (i) => nodes[i].name,
  blockAt: (i) => nodes[i].block,
});

/** Links as columns. */
export class LinkList {
  private size = 0;
  private ends = [new Int32Array(16), new Int32Array(16)];
  private flows = new Float64Array(16);

  add(from: number, to: number, flow: number): void {
    this.grow(1);
    this.ends[0][this.size - 1] = from;
    this.ends[1][this.size - 1] = to;
    this.flows[this.size - 1] = flow;
  }

  addAll(from: Int32Array, to: Int32Array, flow: Float64Array): void {
    const first = this.size;
    this.grow(flow.length);
    this.ends[0].set(from, first);
    this.ends[1].set(to, first);
    this.flows.set(flow, first);
  }

  get count(): number {
    return this.size;
  }

  get columns(): { from: Int32Array; to: Int32Array; flow: Float64Array } {
    const [from, to] = this.ends;
    return { from: from.slice(0, this.size), to: to.slice(0, this.size), flow: this.flows.slice(0, this.size) };
  }

  private grow(by: number): void {
    this.size += by;
    if (this.size <= this.flows.length) return;
    const length = Math.max(2 * this.flows.length, this.size);
    this.ends = this.ends.map((old) => {
      const ends = new Int32Array(length);
      ends.set(old);
      return ends;
    });
    const flows = new Float64Array(length);
    flows.set(this.flows);
    this.flows = flows;
  }
}

/** Places by name; the cells of a table are looked up there. Iterating gives the others only. */
export class Places extends Map<string, number> {
  constructor(private readonly nodes: NodeList) {
    super();
  }

  override get(name: string): number | undefined {
    return super.get(name) ?? this.nodes.cellNamed(name);
  }

  override has(name: string): boolean {
    return this.get(name) !== undefined;
  }
}
