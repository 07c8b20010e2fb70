import type { Pattern } from "../numerics/linear-solver.js";
import { type SparseRows, sparseRows } from "../numerics/sparse.js";
import type { FlowCourse } from "./flow-course.js";
import type { Integrable } from "./integrable.js";
import { Mixing } from "./mixing.js";

/** What a stage sees of the world around it. */
export interface Surroundings {
  /** Concentration that leaves a node of an earlier stage, or a tube. */
  leaving(node: number, t: number, side: number): number;
  /** Concentration that had entered a delay when what now leaves it did. */
  delayed(node: number, t: number, side: number): number;
  /** Tracer put in, amount/s. */
  rate(t: number, side: number): number;
}

/** A cell or block whose states begin at `offset`. */
interface Held {
  readonly node: number;
  readonly offset: number;
  readonly size: number;
  /** Which of the mixing's targets it is; -1 behind a delay. */
  readonly target: number;
}

/** The balances of all that is integrated together: cells, blocks, and junctions and looped tubes between them. */
export class Stage {
  readonly size: number;
  readonly held: readonly Held[] = [];
  /** Delays in loops: what enters them is to be remembered. */
  readonly loops: readonly number[];
  readonly mixing: Mixing;
  readonly pattern: Pattern;
  private readonly values: Float64Array;
  /** By source: where its states are (index into `held`), or -1. */
  private readonly own: Int32Array;
  private readonly constant: Float64Array | undefined;

  constructor(
    private readonly net: Integrable,
    private readonly course: FlowCourse,
    entry: ReadonlyMap<number, number>,
    number: number,
    private readonly around: Surroundings,
  ) {
    const { sort, stage, lag, looped, block } = net;
    const nodes = [...sort.keys()].filter((i) => stage[i] === number);
    this.loops = nodes.filter((i) => lag[i] > 0 && looped[i] === 1);
    const states = nodes.filter((i) => sort[i] === "cell" || sort[i] === "block");
    const fed = states.filter((i) => lag[i] === 0);
    this.mixing = new Mixing(net, [...fed, ...this.loops], entry);
    const target = new Map(fed.map((i, n) => [i, n]));
    let offset = 0;
    this.held = states.map((node) => {
      const size = block[node]?.input.length ?? 1;
      offset += size;
      return { node, offset: offset - size, size, target: target.get(node) ?? -1 };
    });
    this.size = offset;
    this.values = new Float64Array(this.mixing.sources.length);
    const place = new Map(states.map((i, n) => [i, n]));
    this.own = Int32Array.from(this.mixing.sources, (i) => place.get(i) ?? -1);
    const { link, node } = course.at(0);
    const all = this.entries({ link: link.map(() => 1), node: node.map(() => 1) });
    this.pattern = sparseRows(all);
    if (course.constant) this.constant = this.filled(this.entries(course.at(0)));
  }

  /** Concentration that states make leave a cell or block. */
  outflow({ node, offset, size }: Held, x: Float64Array): number {
    const block = this.net.block[node];
    if (!block) return x[offset];
    let sum = 0;
    for (let i = 0; i < size; i++) sum += block.output[i] * x[offset + i];
    return sum;
  }

  /** Brings what streams carry up to date: `mixing.flux`. */
  mix(t: number, x: Float64Array, side: number): void {
    const { sources } = this.mixing;
    const { block } = this.net;
    for (let i = 0; i < sources.length; i++) {
      const node = sources[i];
      const own = this.own[i];
      if (own < 0) this.values[i] = this.around.leaving(node, t, side);
      else {
        this.values[i] = this.outflow(this.held[own], x);
        const direct = block[node]?.direct ?? 0;
        if (direct !== 0) this.values[i] += direct * this.around.delayed(node, t, side);
      }
    }
    this.mixing.run(this.values, this.course.at(t), this.around.rate(t, side));
  }

  rhs(t: number, x: Float64Array, dx: Float64Array, side: number): void {
    this.mix(t, x, side);
    const { node: through } = this.course.at(t);
    const { volume } = this.net.plant.columns;
    const { flux } = this.mixing;
    for (const { node, offset, size, target } of this.held) {
      const q = through[node];
      const block = this.net.block[node];
      if (!block) {
        dx[offset] = (flux[target] - q * x[offset]) / volume[node];
        continue;
      }
      const entering = target >= 0 ? flux[target] / q : this.around.delayed(node, t, side);
      for (let i = 0; i < size; i++) dx[offset + i] = q * block.input[i] * entering;
      addProduct(block.through, x, offset, q, dx);
      addProduct(block.still, x, offset, 1, dx);
    }
  }

  /** m3/s. */
  through(node: number, t: number): number {
    return this.course.through(node, t);
  }

  jacobian(t: number, entries: Float64Array): void {
    entries.set(this.constant ?? this.filled(this.entries(this.course.at(t))));
  }

  /** An amount that cell or block number `h` takes at once. */
  kick(h: number, amount: number, x: Float64Array): void {
    const { node, offset, size } = this.held[h];
    const block = this.net.block[node];
    if (!block) x[offset] += amount / this.net.plant.columns.volume[node];
    else for (let i = 0; i < size; i++) x[offset + i] += block.input[i] * amount;
  }

  /** Amount in a cell or block, behind its delay. */
  amount({ node, offset, size }: Held, x: Float64Array): number {
    const block = this.net.block[node];
    if (!block) return this.net.plant.columns.volume[node] * x[offset];
    let sum = 0;
    for (let i = 0; i < size; i++) sum += block.held[i] * x[offset + i];
    return sum;
  }

  private entries(flows: { link: Float64Array; node: Float64Array }): Map<number, number>[] {
    const rows = Array.from({ length: this.size }, () => new Map<number, number>());
    const weights = this.mixing.weights(flows);
    const { block, plant } = this.net;
    const add = (i: number, j: number, a: number): void => {
      if (a !== 0) rows[i].set(j, (rows[i].get(j) ?? 0) + a);
    };
    /** Row i gains `a` times what streams bring to a target. */
    const bring = (i: number, target: number, a: number): void => {
      for (const [source, w] of weights[target]) {
        const own = this.own[source];
        if (own < 0) continue;
        const { node, offset, size } = this.held[own];
        const output = block[node]?.output;
        for (let k = 0; k < size; k++) add(i, offset + k, a * w * (output ? output[k] : 1));
      }
    };
    for (const { node, offset, size, target } of this.held) {
      const b = block[node];
      const q = flows.node[node];
      if (!b) {
        const { volume } = plant.columns;
        bring(offset, target, 1 / volume[node]);
        add(offset, offset, -q / volume[node]);
        continue;
      }
      for (let i = 0; i < size; i++) {
        for (let e = b.through.start[i]; e < b.through.start[i + 1]; e++)
          add(offset + i, offset + b.through.column[e], q * b.through.value[e]);
        for (let e = b.still.start[i]; e < b.still.start[i + 1]; e++)
          add(offset + i, offset + b.still.column[e], b.still.value[e]);
        if (target >= 0 && b.input[i] !== 0) bring(offset + i, target, b.input[i]);
      }
    }
    return rows;
  }

  private filled(rows: readonly ReadonlyMap<number, number>[]): Float64Array {
    const { start, column } = this.pattern;
    const value = new Float64Array(column.length);
    rows.forEach((row, i) => {
      for (let k = start[i]; k < start[i + 1]; k++) value[k] = row.get(column[k]) ?? 0;
    });
    return value;
  }
}

/** y += factor A x, for the stretch of both that begins at an offset. */
function addProduct(a: SparseRows, x: Float64Array, offset: number, factor: number, y: Float64Array): void {
  for (let i = 0; i < a.size; i++) {
    let sum = 0;
    for (let k = a.start[i]; k < a.start[i + 1]; k++) sum += a.value[k] * x[offset + a.column[k]];
    y[offset + i] += factor * sum;
  }
}
