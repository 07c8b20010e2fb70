import { EventQueue } from "../numerics/event-queue.js";
import type { FlowCourse } from "./flow-course.js";
import type { Integrable } from "./integrable.js";
import type { Drive } from "./linear-system.js";

/** A part of an instant amount that no cell has met yet. */
export interface Kick {
  readonly time: number;
  readonly node: number;
  /** In the unit of the amount. */
  readonly amount: number;
}

/** Where and when what is put in jumps, kinks, or comes all at once: found before anything is integrated. */
export interface Arrivals {
  /** Amounts that cells and blocks take at once, in order of time. */
  readonly kicks: readonly Kick[];
  /** Undispersed amounts that leave a node, in order of time. */
  readonly spikes: ReadonlyMap<number, { time: number; amount: number }[]>;
  /** Undispersed amounts on their way: when they entered and when they leave a delay. */
  readonly travelling: readonly { node: number; entered: number; left: number; amount: number }[];
  /** By stage: times at which what is integrated there is not smooth, ascending. */
  readonly breaks: readonly Float64Array[];
  /** By node: times at which what leaves it is not smooth. */
  readonly jumps: ReadonlyMap<number, number[]>;
  /** Amounts that were given up because there were too many spikes. */
  readonly leftOut: number;
  /** s; what arrives later was given up because there was too much of it. Infinity where all was followed. */
  readonly complete: number;
}

/** Derivatives up to this order may jump at a break; the integrator's own error control sees to higher ones. */
const highestOrder = 5;
/** Parts of the tracer less than this are not followed. */
const smallest = 1e-12;
/** Times closer than this, relative, are one. */
const apart = 1e-12;
const mostEvents = 200_000;

interface Event {
  readonly time: number;
  /** A delay that something comes out of. */
  readonly node: number;
  /** First derivative of what comes out that jumps. */
  readonly order: number;
  /** Part of the tracer that it concerns. */
  readonly weight: number;
  /** What comes out undispersed: an amount, and when it went in. */
  readonly amount: number;
  readonly entered: number;
}

/**
 * @param entry   the part of the drive that goes into each node
 * @param horizon s; nothing later is wanted
 */
export function arrivals(
  net: Integrable,
  course: FlowCourse,
  entry: ReadonlyMap<number, number>,
  drive: Drive,
  horizon: number,
): Arrivals {
  // What arrives at the horizon but for rounding has arrived, here as where spikes are counted.
  return new Finder(net, course, entry, drive, horizon * (1 + 2 * apart)).find();
}

class Finder {
  private readonly queue = new EventQueue<Event>();
  private readonly kicks: Kick[] = [];
  private readonly spikes = new Map<number, { time: number; amount: number }[]>();
  private readonly travelling: { node: number; entered: number; left: number; amount: number }[] = [];
  private readonly breaks: number[][];
  private readonly jumps = new Map<number, number[]>();
  private readonly rank: Int32Array;
  private readonly size: number;
  /** Of the moment at work: lowest order and largest weight by node. */
  private seen = new Map<number, { order: number; weight: number }>();
  /** Amounts that enter delays at this moment. */
  private readonly entering = new Map<number, number>();

  constructor(
    private readonly net: Integrable,
    private readonly course: FlowCourse,
    private readonly entry: ReadonlyMap<number, number>,
    private readonly drive: Drive,
    private readonly horizon: number,
  ) {
    this.breaks = Array.from({ length: net.stages }, () => []);
    this.rank = new Int32Array(net.sort.length);
    net.plant.groups.forEach((group, g) => {
      for (const i of group) this.rank[i] = g;
    });
    this.size = Math.abs(drive.amount) || 1;
  }

  find(): Arrivals {
    const { drive, entry, course, horizon } = this;
    const starts = new Map<number, number>(); // time -> order
    drive.times.forEach((t, i) => {
      const before = i === 0 ? 0 : drive.level[i - 1] + drive.slope[i - 1] * (t - drive.times[i - 1]);
      starts.set(t, Math.min(starts.get(t) ?? 9, drive.level[i] === before ? 1 : 0));
    });
    const begin = [...starts].map(([time, order]) => ({ time, order, amount: 0 }));
    if (drive.amount !== 0) begin.push({ time: 0, order: -1, amount: drive.amount });
    begin.sort((a, b) => a.time - b.time);
    for (const t of course.knots) if (t > 0 && t <= horizon) for (const list of this.breaks) list.push(t);
    let [next, events] = [0, 0];
    for (;;) {
      const time = Math.min(this.queue.next, begin[next]?.time ?? Number.POSITIVE_INFINITY);
      if (!(time <= horizon) || events > mostEvents) break;
      this.seen = new Map();
      const amounts = new Map<number, number>();
      while (next < begin.length && begin[next].time - time <= apart * time) {
        const { order, amount } = begin[next++];
        for (const [node, part] of entry) {
          if (amount !== 0) this.enterAmount(node, part * amount, time, amounts);
          this.enter(node, order, Math.abs(part), time);
        }
      }
      if (this.queue.next - time <= apart * time) {
        for (const e of this.queue.pop(apart * time)) {
          events++;
          this.leave(e, time, amounts);
        }
      }
      this.spread(amounts, time);
      this.depart(time);
    }
    let leftOut = 0;
    const complete = events > mostEvents ? this.queue.next : Number.POSITIVE_INFINITY;
    while (events > mostEvents && this.queue.size > 0)
      leftOut += this.queue.pop(0).reduce((sum, e) => sum + e.amount, 0);
    return {
      kicks: this.kicks,
      spikes: this.spikes,
      travelling: this.travelling,
      breaks: this.breaks.map((list) => distinct(list)),
      jumps: this.jumps,
      leftOut,
      complete,
    };
  }

  /** What comes out of a delay. */
  private leave({ node, order, weight, amount, entered }: Event, time: number, amounts: Map<number, number>): void {
    const block = this.net.block[node];
    if (amount !== 0) {
      this.travelling.push({ node, entered, left: time, amount });
      if (block) this.kicks.push({ time, node, amount });
      const direct = amount * (block ? block.direct : 1);
      if (direct !== 0) amounts.set(node, (amounts.get(node) ?? 0) + direct);
    }
    if (block) this.breaks[this.net.stage[node]].push(time);
    this.exit(node, block && block.direct === 0 ? order + block.smooths : order, weight, time);
  }

  /** A signal whose derivative of an order jumps enters a node. */
  private enter(node: number, order: number, weight: number, time: number): void {
    const { sort, lag, looped, stage, block } = this.net;
    if (order > highestOrder || weight < smallest) return;
    const known = this.seen.get(node);
    if (known && known.order <= order && known.weight * 2 >= weight) return;
    this.seen.set(node, { order: Math.min(order, known?.order ?? 9), weight: Math.max(weight, known?.weight ?? 0) });
    const mark = (): void => {
      this.breaks[stage[node]].push(time);
    };
    if (sort[node] === "joint") this.exit(node, order, weight, time);
    else if (sort[node] === "cell") {
      mark();
      this.exit(node, order + 1, weight, time);
    } else if (lag[node] > 0) {
      if (looped[node]) mark();
      const left = this.course.leaves(node, time, lag[node]);
      if (left <= this.horizon) this.queue.push({ time: left, node, order, weight, amount: 0, entered: time });
    } else if (sort[node] === "block") {
      mark();
      this.exit(node, order + (block[node]?.smooths ?? 0), weight, time);
    }
  }

  private exit(node: number, order: number, weight: number, time: number): void {
    if (order > highestOrder) return;
    const { out, plant } = this.net;
    const jumps = this.jumps.get(node);
    if (jumps) jumps.push(time);
    else this.jumps.set(node, [time]);
    const { link, node: through } = this.course.at(time);
    for (let e = out.start[node]; e < out.start[node + 1]; e++) {
      const k = out.edges[e];
      if (link[k] > 0) this.enter(plant.to[k], order, (weight * link[k]) / through[node], time);
    }
  }

  /** An amount enters a node all at once. */
  private enterAmount(node: number, amount: number, time: number, amounts: Map<number, number>): void {
    const { sort, lag } = this.net;
    if (sort[node] === "joint") amounts.set(node, (amounts.get(node) ?? 0) + amount);
    else if (lag[node] > 0) {
      if (Math.abs(amount) < smallest * this.size) return;
      const left = this.course.leaves(node, time, lag[node]);
      const weight = Math.abs(amount) / this.size;
      this.queue.push({ time: left, node, order: -1, weight, amount, entered: time });
      if (left > this.horizon) this.travelling.push({ node, entered: time, left, amount });
    } else if (sort[node] !== "none") this.kicks.push({ time, node, amount });
  }

  /** Sends amounts on their way through delays. */
  private depart(time: number): void {
    for (const [node, amount] of this.entering) {
      const weight = Math.abs(amount) / this.size;
      if (weight < smallest) continue;
      const left = this.course.leaves(node, time, this.net.lag[node]);
      if (left > this.horizon) this.travelling.push({ node, entered: time, left, amount });
      else this.queue.push({ time: left, node, order: -1, weight, amount, entered: time });
    }
    this.entering.clear();
  }

  /** Amounts go through junctions, in flow order, round and round where these form circles. */
  private spread(amounts: Map<number, number>, time: number): void {
    const { out, plant } = this.net;
    const { link, node: through } = this.course.at(time);
    const total = new Map<number, number>();
    while (amounts.size > 0) {
      let node = -1;
      for (const i of amounts.keys()) if (node < 0 || this.rank[i] < this.rank[node]) node = i;
      const amount = amounts.get(node) as number;
      amounts.delete(node);
      if (Math.abs(amount) < 1e-16 * this.size) continue;
      total.set(node, (total.get(node) ?? 0) + amount);
      for (let e = out.start[node]; e < out.start[node + 1]; e++) {
        const k = out.edges[e];
        if (link[k] > 0) this.enterAmount(plant.to[k], (amount * link[k]) / through[node], time, amounts);
      }
    }
    for (const [node, amount] of total) {
      const list = this.spikes.get(node);
      if (list) list.push({ time, amount });
      else this.spikes.set(node, [{ time, amount }]);
    }
  }
}

function distinct(times: number[]): Float64Array {
  const sorted = times.sort((a, b) => a - b);
  return Float64Array.from(sorted.filter((t, i) => i === 0 || t - sorted[i - 1] > apart * t));
}
