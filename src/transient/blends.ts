import type { Plant } from "../compile/plant.js";
import { stronglyConnected } from "../numerics/graph.js";
import { factor, solve } from "../numerics/lu.js";
import type { FlowCourse, FlowsNow } from "../simulate/flow-course.js";
import type { Sort } from "../simulate/integrable.js";
import type { Warming } from "./warming.js";

/** What is carried: the liquid, or the temperature where exchangers bring some of it alone. */
export const Carried = { liquid: 0, warmth: 1 } as const;
export type Carried = (typeof Carried)[keyof typeof Carried];

/** One way into a node: a link, or a feed, from a source itself or, part by part, from a junction. */
interface Way {
  /** Of the link; of a feed -1. */
  readonly link: number;
  /** Whose flow counts where it is a feed. */
  readonly feed: number;
  /** Where the parts of a junction begin that it comes from; -1 where it comes from a source. */
  readonly junction: number;
  /** Where in the node's own parts each goes. */
  readonly to: Int32Array;
}

/**
 * What enters every node, as parts of what leaves nodes that hold something and of what feeds bring: junctions hold nothing.
 * Parts add to 1. A source is a node's number, or the number of nodes plus that of a feed.
 */
export class Blends {
  private readonly ways: Way[][];
  private readonly own: Int32Array[];
  private readonly begin: Int32Array;
  /** Nodes in the order in which their parts are found; junctions that feed one another together. */
  private readonly order: readonly Int32Array[];
  private readonly known: readonly Map<number, Float64Array>[] = [new Map(), new Map()];
  private readonly changing: readonly Float64Array[];
  private readonly last = [-1, -1];
  /** By link that an exchanger is: its gain. By feed, what is left of its own temperature. */
  private readonly gains: ReadonlyMap<number, number>;
  private readonly kept: ReadonlyMap<number, number>;

  constructor(
    plant: Plant,
    sort: readonly Sort[],
    readonly course: FlowCourse,
    private readonly warmings: readonly Warming[] = [],
  ) {
    this.gains = new Map(warmings.map(({ link, gain }) => [link, gain]));
    this.kept = new Map(warmings.map(({ feed, gain }) => [plant.columns.size + feed, 1 - gain]));
    const { size } = plant.columns;
    const into: { from: number; link: number; feed: number }[][] = Array.from({ length: size }, () => []);
    plant.to.forEach((to, k) => {
      if (plant.flow[k] > 0) into[to].push({ from: plant.from[k], link: k, feed: -1 });
    });
    plant.feeds.forEach(({ node, flow }, k) => {
      if (flow > 0) into[node].push({ from: size + k, link: -1, feed: size + k });
    });
    const joint = (i: number): boolean => i < size && sort[i] === "joint";
    this.order = ordered(plant, joint);
    this.own = Array.from({ length: size }, () => new Int32Array(0));
    for (const group of this.order) {
      const found = new Set<number>();
      for (const node of group) {
        for (const { from } of into[node]) {
          if (!joint(from)) found.add(from);
          else for (const source of this.own[from]) found.add(source);
        }
      }
      // Those that feed one another all have what any of them takes in.
      const sources = Int32Array.from(found).sort();
      for (const node of group) this.own[node] = sources;
    }
    this.begin = new Int32Array(size + 1);
    for (let i = 0; i < size; i++) this.begin[i + 1] = this.begin[i] + this.own[i].length;
    this.changing = [0, 1].map(() => new Float64Array(this.begin[size]));
    this.ways = into.map((all, node) => {
      const place = new Map(Array.from(this.own[node], (source, j) => [source, j]));
      return all.map(({ from, link, feed }): Way => {
        const through = joint(from) ? this.own[from] : Int32Array.of(from);
        return {
          link,
          feed,
          junction: joint(from) ? from : -1,
          to: through.map((source) => place.get(source) ?? -1),
        };
      });
    });
  }

  /** What enters a node comes from. */
  sources(node: number): Int32Array {
    return this.own[node];
  }

  /** Where in `at` the parts of a node begin, in the order of its sources. */
  first(node: number): number {
    return this.begin[node];
  }

  /** Do temperatures go other ways than the liquid? */
  get apart(): boolean {
    return this.warmings.length > 0;
  }

  /** The parts of all nodes at a time; good until the next call. */
  at(t: number, side: number, of: Carried = Carried.liquid): Float64Array {
    return this.by(this.course.at(t, side), of);
  }

  /** The parts at some flows. */
  by(flows: FlowsNow, of: Carried = Carried.liquid): Float64Array {
    const changing = this.changing[of];
    if (flows.stamp < 0) {
      if (flows.stamp !== this.last[of]) this.find(flows, of, changing);
      this.last[of] = flows.stamp;
      return changing;
    }
    let parts = this.known[of].get(flows.stamp);
    if (!parts) {
      parts = new Float64Array(changing.length);
      this.find(flows, of, parts);
      this.known[of].set(flows.stamp, parts);
    }
    return parts;
  }

  private share({ link, feed }: Way, node: number, { link: links, node: through }: FlowsNow, of: Carried): number {
    if (link < 0) return (through[feed] / through[node]) * (of === Carried.warmth ? (this.kept.get(feed) ?? 1) : 1);
    const gain = this.gains.get(link);
    if (gain === undefined) return links[link] / through[node];
    return of === Carried.warmth ? gain : 0;
  }

  private find(flows: FlowsNow, of: Carried, parts: Float64Array): void {
    parts.fill(0);
    for (const group of this.order) {
      const round = group.length > 1 || this.ways[group[0]].some((way) => way.junction === group[0]);
      const inside = round ? group : undefined;
      for (const node of group) {
        const to = this.begin[node];
        for (const way of this.ways[node]) {
          if (inside?.includes(way.junction)) continue;
          const share = this.share(way, node, flows, of);
          const from = way.junction < 0 ? -1 : this.begin[way.junction];
          for (let j = 0; j < way.to.length; j++) parts[to + way.to[j]] += from < 0 ? share : share * parts[from + j];
        }
      }
      if (inside) this.round(inside, flows, of, parts);
    }
  }

  /** Junctions that feed one another: (1 - shares) blend = what comes from elsewhere. */
  private round(group: Int32Array, flows: FlowsNow, of: Carried, parts: Float64Array): void {
    const n = group.length;
    const matrix = new Float64Array(n * n);
    group.forEach((node, i) => {
      matrix[i * n + i] += 1;
      for (const way of this.ways[node]) {
        const j = group.indexOf(way.junction);
        if (j >= 0) matrix[i * n + j] -= this.share(way, node, flows, of);
      }
    });
    const lu = factor(matrix, n);
    if (lu === "singular") return;
    const column = new Float64Array(n);
    for (let s = 0; s < this.own[group[0]].length; s++) {
      for (let i = 0; i < n; i++) column[i] = parts[this.begin[group[i]] + s];
      solve(lu, column);
      for (let i = 0; i < n; i++) parts[this.begin[group[i]] + s] = column[i];
    }
  }
}

/** Junctions before what they feed, then all others. */
function ordered(plant: Plant, joint: (i: number) => boolean): Int32Array[] {
  const { size } = plant.columns;
  const kept = [...plant.from.keys()].filter((k) => joint(plant.from[k]) && joint(plant.to[k]) && plant.flow[k] > 0);
  const graph = { size, from: kept.map((k) => plant.from[k]), to: kept.map((k) => plant.to[k]) };
  const groups = [...stronglyConnected(graph)].map((group) => Int32Array.from(group));
  return [...groups.filter(([i]) => joint(i)), ...groups.filter(([i]) => !joint(i))];
}
