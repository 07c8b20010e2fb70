import { factor, solve } from "../numerics/lu.js";
import type { FlowsNow } from "./flow-course.js";
import type { Integrable } from "./integrable.js";

/** Junctions that feed one another, or one alone, by local number. */
interface Knot {
  readonly joints: Int32Array;
  readonly circle: boolean;
}

/** Links into a row: which, and the local number of where from. */
interface Row {
  readonly node: number;
  readonly links: Int32Array;
  readonly from: Int32Array;
  /** Part of what is put in that goes in here. */
  readonly put: number;
}

/**
 * What streams bring to some nodes, from what leaves cells, blocks and tubes: junctions in between hold nothing, so they are
 * done with on the way.
 */
export class Mixing {
  /** Cells, blocks and tubes that the tracer comes from. */
  readonly sources: Int32Array;
  /** Tracer brought to each target by a `run`, amount/s. */
  readonly flux: Float64Array;
  private readonly joints: readonly Row[];
  private readonly knots: readonly Knot[];
  private readonly rows: readonly Row[];
  private readonly c: Float64Array;

  /**
   * @param targets nodes
   * @param entry   the part of what is put in that goes into each node
   */
  constructor(
    net: Integrable,
    readonly targets: ArrayLike<number>,
    entry: ReadonlyMap<number, number>,
  ) {
    const { plant, sort, into } = net;
    const links = (i: number): number[] => {
      const all: number[] = [];
      for (let e = into.start[i]; e < into.start[i + 1]; e++) {
        if (sort[plant.from[into.edges[e]]] !== "none") all.push(into.edges[e]);
      }
      return all;
    };
    const found = new Set<number>();
    const sources = new Set<number>();
    const open = Array.from(targets);
    for (let i = open.pop(); i !== undefined; i = open.pop()) {
      for (const k of links(i)) {
        const j = plant.from[k];
        if (sort[j] !== "joint") sources.add(j);
        else if (!found.has(j)) {
          found.add(j);
          open.push(j);
        }
      }
    }
    this.sources = Int32Array.from(sources).sort();
    const local = new Map<number, number>();
    for (const i of this.sources) local.set(i, local.size);
    const knots: Knot[] = [];
    const joints: Row[] = [];
    const row = (node: number): Row => {
      const all = links(node);
      return {
        node,
        put: entry.get(node) ?? 0,
        links: Int32Array.from(all),
        from: Int32Array.from(all, (k) => local.get(plant.from[k]) as number),
      };
    };
    const ordered: number[][] = [];
    for (const group of jointGroups(net, found)) {
      for (const i of group) local.set(i, local.size);
      ordered.push(group);
    }
    for (const group of ordered) {
      const first = joints.length;
      for (const i of group) joints.push(row(i));
      const own = joints[first];
      const circle = group.length > 1 || own.from.includes(local.get(own.node) as number);
      knots.push({ joints: Int32Array.from(group, (_, n) => first + n), circle });
    }
    this.joints = joints;
    this.knots = knots;
    this.rows = Array.from(targets, row);
    this.flux = new Float64Array(this.rows.length);
    this.c = new Float64Array(local.size);
  }

  /**
   * @param values concentration leaving each source
   * @param rate   tracer put in at the entry, amount/s
   */
  run(values: ArrayLike<number>, { link, node }: FlowsNow, rate: number): void {
    const { c, rows, flux } = this;
    for (let i = 0; i < this.sources.length; i++) c[i] = values[i];
    for (const knot of this.knots) this.mix(knot, link, node, rate);
    for (let i = 0; i < rows.length; i++) flux[i] = brought(rows[i], link, c) + rows[i].put * rate;
  }

  /** Flux into each target per concentration of each source: `flux = weights * values`, by target. */
  weights(flows: Omit<FlowsNow, "stamp">): Map<number, number>[] {
    const blends: Map<number, number>[] = Array.from(this.sources, (_, i) => new Map([[i, 1]]));
    const first = this.sources.length;
    for (const { joints, circle } of this.knots) {
      if (!circle) {
        const { node, links, from } = this.joints[joints[0]];
        const sum = new Map<number, number>();
        links.forEach((k, e) => {
          for (const [s, w] of blends[from[e]]) {
            sum.set(s, (sum.get(s) ?? 0) + (w * flows.link[k]) / flows.node[node]);
          }
        });
        blends[first + joints[0]] = sum;
        continue;
      }
      for (const j of joints) blends[first + j] = new Map();
      const outside = new Set<number>();
      for (const j of joints) {
        for (const f of this.joints[j].from) if (blends[f]) for (const s of blends[f].keys()) outside.add(s);
      }
      for (const s of outside) {
        for (let i = 0; i < first + joints[0]; i++) this.c[i] = blends[i].get(s) ?? 0;
        this.mix({ joints, circle }, flows.link, flows.node, 0);
        for (const j of joints) if (this.c[first + j] !== 0) blends[first + j].set(s, this.c[first + j]);
      }
    }
    return this.rows.map(({ links, from }) => {
      const sum = new Map<number, number>();
      links.forEach((k, e) => {
        for (const [s, w] of blends[from[e]]) if (flows.link[k] > 0) sum.set(s, (sum.get(s) ?? 0) + w * flows.link[k]);
      });
      return sum;
    });
  }

  private mix({ joints, circle }: Knot, link: Float64Array, node: Float64Array, rate: number): void {
    const { c } = this;
    const first = this.sources.length;
    if (!circle) {
      const row = this.joints[joints[0]];
      c[first + joints[0]] = (brought(row, link, c) + row.put * rate) / node[row.node];
      return;
    }
    const n = joints.length;
    const matrix = new Float64Array(n * n);
    const rhs = new Float64Array(n);
    for (const j of joints) c[first + j] = 0;
    for (let i = 0; i < n; i++) {
      const row = this.joints[joints[i]];
      matrix[i * n + i] = node[row.node];
      rhs[i] = brought(row, link, c) + row.put * rate;
      row.from.forEach((f, e) => {
        const j = f - first - joints[0];
        if (j >= 0 && j < n) matrix[i * n + j] -= link[row.links[e]];
      });
    }
    const lu = factor(matrix, n);
    if (lu !== "singular") solve(lu, rhs);
    for (let i = 0; i < n; i++) c[first + joints[i]] = lu === "singular" ? 0 : rhs[i];
  }
}

function brought({ links, from }: Row, link: Float64Array, c: Float64Array): number {
  let sum = 0;
  for (let e = 0; e < links.length; e++) sum += link[links[e]] * c[from[e]];
  return sum;
}

/** Junctions in flow order, those that form circles together. */
function jointGroups({ plant, sort, into }: Integrable, found: ReadonlySet<number>): number[][] {
  const groups: number[][] = [];
  const done = new Set<number>();
  for (const group of plant.groups) {
    const own = Array.from(group).filter((i) => found.has(i));
    if (own.length === 0) continue;
    // Within a circle of the plant junctions may be in line all the same: those whose junctions before are done go first.
    let waiting = own;
    while (waiting.length > 0) {
      const ready = waiting.filter((i) => {
        for (let e = into.start[i]; e < into.start[i + 1]; e++) {
          const j = plant.from[into.edges[e]];
          if (sort[j] === "joint" && found.has(j) && !done.has(j)) return false;
        }
        return true;
      });
      for (const i of ready) {
        groups.push([i]);
        done.add(i);
      }
      if (ready.length === 0) {
        groups.push(waiting);
        for (const i of waiting) done.add(i);
        break;
      }
      waiting = waiting.filter((i) => !done.has(i));
    }
  }
  return groups;
}
