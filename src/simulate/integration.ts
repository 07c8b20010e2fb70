import type { Halt } from "../numerics/odex.js";
import { quadrature } from "../numerics/quadrature.js";
import { radauIntegrator } from "../numerics/stiff.js";
import { type Arrivals, arrivals } from "./arrivals.js";
import type { FlowCourse } from "./flow-course.js";
import type { Integrable } from "./integrable.js";
import { type Drive, driveAt } from "./linear-system.js";
import { Mixing } from "./mixing.js";
import { Stage, type Surroundings } from "./stage.js";
import { runStage, type StageAnswer } from "./stage-run.js";

/** What is put in, and what there was before. */
export interface Put {
  /** The part that goes into each node. */
  readonly entry: ReadonlyMap<number, number>;
  readonly drive: Drive;
  /** Is the drive's rate a concentration of the flow through the entry, one node? */
  readonly asConcentration?: boolean;
  /** Concentration leaving every node before 0, in balance; default: none. */
  readonly before?: Float64Array | undefined;
}

/** Steps of what arrives that one step may take in. */
const stepsAtOnce = 6;
/** In mean times: nothing is worth shorter steps. */
const shortestStep = 1e-9;
const mostWays = 300;

/** From a stage through delays. */
interface Way {
  readonly from: number;
  readonly delays: readonly { readonly node: number; readonly volume: number }[];
}

/** Longest step, in mean times: whatever is asked, steps that begin before its end are the same. */
const longestStep = 1 / 8;

/**
 * Tracer in a plant, integrated: stage by stage in flow order, tubes read off what entered them, with every jump where it is.
 */
export class Integration implements Surroundings {
  private readonly arrivals: Arrivals;
  private readonly answers: StageAnswer[] = [];
  private readonly stages: Stage[] = [];
  private readonly mixings = new Map<number, { mixing: Mixing; values: Float64Array }>();
  readonly stopped: { stage: number; t: number; why: Halt; node: string } | undefined;
  readonly steps: number = 0;

  /** @param looks nodes whose outflow will be asked for, up to `horizon` s */
  constructor(
    private readonly net: Integrable,
    private readonly course: FlowCourse,
    private readonly put: Put,
    readonly horizon: number,
    looks: readonly number[],
  ) {
    const { plant, stages } = net;
    const unit = meanTime(net);
    this.arrivals = arrivals(net, course, put.entry, put.drive, horizon + (stages + 1) * unit * 2 * longestStep);
    const wanted = this.wanted(looks);
    const scale = this.scale(unit);
    for (let s = 0; s < stages; s++) {
      const stage = new Stage(net, course, put.entry, s, this);
      this.stages.push(stage);
      const loop = stage.loops.reduce(
        (least, i) => Math.min(least, course.shortest(i, net.lag[i])),
        Number.POSITIVE_INFINITY,
      );
      const step = Math.min(unit * longestStep, 0.98 * loop);
      const numbers = new Set(stage.held.map((h) => h.node));
      const start = new Float64Array(Math.max(1, stage.size));
      if (put.before) for (const h of stage.held) start.fill(put.before[h.node], h.offset, h.offset + h.size);
      const ask = {
        unit,
        scale,
        until: horizon + (stages - s) * unit * longestStep * 1.02,
        step,
        longest: this.pace(s, stage, step, unit),
        breaks: this.arrivals.breaks[s],
        kicks: this.arrivals.kicks.filter((k) => numbers.has(k.node)),
        wanted,
        snapshot: horizon,
        start,
      };
      const answer =
        stage.size + stage.loops.length > 0 ? runStage(stage, ask, (a) => this.answers.push(a)) : undefined;
      if (!answer) this.answers.push(nothing);
      else this.steps += answer.steps;
      if (answer?.stopped && !this.stopped) {
        const at = stage.held[answer.stopped.node] ?? stage.held[0];
        this.stopped = {
          stage: s,
          t: answer.stopped.t,
          why: answer.stopped.why,
          node: at ? plant.nodes[at.node].name : "",
        };
      }
    }
  }

  /** Undispersed amounts that leave a node. */
  spikes(node: number): readonly { time: number; amount: number }[] {
    return this.arrivals.spikes.get(node) ?? [];
  }

  /** s; what arrives later was given up because there was too much of it. */
  get complete(): number {
    return this.arrivals.complete;
  }

  get leftOut(): number {
    return this.arrivals.leftOut;
  }

  rate(t: number, side: number): number {
    const soft = t + side * 2e-12 * t;
    const { times, level, slope } = this.put.drive;
    let i = times.length - 1;
    while (i >= 0 && times[i] > soft) i--;
    if (i < 0) return 0;
    const rate = level[i] + slope[i] * (t - times[i]);
    return this.put.asConcentration ? rate * this.course.through(this.node, t) : rate;
  }

  leaving(node: number, t: number, side: number): number {
    const { sort, block, stage } = this.net;
    if (t < 0) return this.put.before?.[node] ?? 0;
    switch (sort[node]) {
      case "none":
        return 0;
      case "joint":
        return this.entering(node, t, side);
      case "delay":
        return this.delayed(node, t, side);
      default: {
        const { history, signal } = this.answers[stage[node]];
        const own = history.value(signal.get(node) as number, t, side);
        const direct = block[node]?.direct ?? 0;
        return direct === 0 ? own : own + direct * this.delayed(node, t, side);
      }
    }
  }

  delayed(node: number, t: number, side: number): number {
    const { lag, looped, stage } = this.net;
    const then = this.course.entered(node, t, lag[node]);
    // What entered at 0 is jumped to when it comes out, not seen just before.
    if (then === Number.NEGATIVE_INFINITY || (side < 0 && then < 2e-12 * t)) return this.put.before?.[node] ?? 0;
    if (!looped[node]) return this.entering(node, then, side);
    const { history, inlet } = this.answers[stage[node]];
    return history.value(inlet.get(node) as number, then, side);
  }

  /** Integral of what has left a node by t, spikes left out; where flows are constant. */
  integral(node: number, t: number): number {
    const { sort, block, stage } = this.net;
    if (!(t > 0) || sort[node] === "none") return 0;
    if (sort[node] === "joint") return this.enteringIntegral(node, t);
    if (sort[node] === "delay") return this.delayedIntegral(node, t);
    const { history, signal } = this.answers[stage[node]];
    const own = history.integral(signal.get(node) as number, t);
    const direct = block[node]?.direct ?? 0;
    return direct === 0 ? own : own + direct * this.delayedIntegral(node, t);
  }

  /** Amount that has left through a node by t. */
  left(node: number, t: number): number {
    let sum = this.spikes(node).reduce((s, p) => (p.time <= t * (1 + 2e-12) ? s + p.amount : s), 0);
    if (this.course.constant) sum += this.course.through(node, t) * this.integral(node, t);
    else sum += this.passed((u) => this.course.through(node, u) * this.leaving(node, u, 1), node, 0, t);
    return sum;
  }

  /** Amount in cells, blocks and tubes at the horizon. */
  inside(): number {
    const { lag, sort } = this.net;
    const t = this.horizon;
    let sum = 0;
    this.stages.forEach((stage, s) => {
      const { snapshot } = this.answers[s];
      if (snapshot) for (const h of stage.held) sum += stage.amount(h, snapshot);
    });
    for (let node = 0; node < lag.length; node++) {
      if (!(lag[node] > 0) || sort[node] === "none") continue;
      const then = Math.max(0, this.course.entered(node, t, lag[node]));
      const q = (u: number) => this.course.through(node, u);
      if (this.course.constant) sum += q(t) * (this.enteredIntegral(node, t) - this.enteredIntegral(node, then));
      else sum += this.passed((u) => q(u) * this.entered(node, u), node, then, t);
    }
    for (const { entered, left, amount } of this.arrivals.travelling)
      if (entered <= t * (1 + 2e-12) && left > t * (1 + 2e-12)) sum += amount;
    return sum;
  }

  /** What has been put in by t. */
  injected(t: number): number {
    const { drive, asConcentration } = this.put;
    if (!asConcentration) return driveAt(drive, t).total;
    return drive.amount + this.passed((u) => this.rate(u, 1), this.node, 0, t);
  }

  /** Outflow of a node seen by a first-order detector that held nothing before. */
  lagged(node: number, lag: number, times: Float64Array): Float64Array {
    const values = new Float64Array(times.length);
    const spikes = this.spikes(node);
    const stops = [...new Set([...(this.arrivals.jumps.get(node) ?? []), ...spikes.map((s) => s.time)])]
      .filter((t) => t <= this.horizon)
      .sort((a, b) => a - b);
    const unit = meanTime(this.net);
    const y = new Float64Array(1);
    let [from, to] = [0, 0];
    const integrator = radauIntegrator(
      {
        size: 1,
        rhs: (t, v, dv) => {
          dv[0] = (this.leaving(node, t, t - from < to - t ? 1 : -1) - v[0]) / lag;
        },
        jacobian: (_, __, entries) => {
          entries[0] = -1 / lag;
        },
      },
      1e-10,
    );
    let next = 0;
    while (next < times.length && times[next] < 0) next++;
    let spike = 0;
    for (const end of [...stops.filter((t) => t > 0), 1024 * unit + 2 * this.horizon]) {
      from = to;
      to = end;
      for (; spike < spikes.length && spikes[spike].time <= from * (1 + 1e-12); spike++) {
        y[0] += spikes[spike].amount / this.course.through(node, from) / lag;
      }
      const due: number[] = [];
      let last = next;
      while (last < times.length && times[last] < to) due.push(Math.max(times[last++], from));
      const stretch = {
        rhs: () => undefined,
        from,
        to,
        relative: 1e-10,
        absolute: 1e-13 * this.scale(unit),
        maxSteps: 1e7,
        outputs: due,
        firstStep: Math.min(lag, unit) * 1e-4,
        longest: () => unit * longestStep,
        accepted: (t: number, h: number) => t + h >= this.horizon,
      };
      integrator(stretch, y, (row) => {
        values[next++] = row[0];
      });
      if (to > this.horizon) break;
    }
    return values;
  }

  private entering(node: number, t: number, side: number): number {
    if (t < 0) return this.put.before?.[node] ?? 0;
    const { mixing, values } = this.mixingOf(node);
    const { sources } = mixing;
    for (let i = 0; i < sources.length; i++) values[i] = this.leaving(sources[i], t, side);
    mixing.run(values, this.course.at(t), this.rate(t, side));
    return mixing.flux[0] / this.course.through(node, t);
  }

  /** Concentration that enters a delay now. */
  private entered(node: number, t: number): number {
    const { looped, stage } = this.net;
    if (!looped[node]) return this.entering(node, t, 1);
    const { history, inlet } = this.answers[stage[node]];
    return history.value(inlet.get(node) as number, t, 1);
  }

  private enteringIntegral(node: number, t: number): number {
    const { mixing, values } = this.mixingOf(node);
    const { sources } = mixing;
    for (let i = 0; i < sources.length; i++) values[i] = this.integral(sources[i], t);
    mixing.run(values, this.course.at(t), driveAt({ ...this.put.drive, amount: 0 }, t).total);
    return mixing.flux[0] / this.course.through(node, t);
  }

  private enteredIntegral(node: number, t: number): number {
    const { looped, stage } = this.net;
    if (!(t > 0)) return 0;
    if (!looped[node]) return this.enteringIntegral(node, t);
    const { history, inlet } = this.answers[stage[node]];
    return history.integral(inlet.get(node) as number, t);
  }

  private delayedIntegral(node: number, t: number): number {
    return this.enteredIntegral(node, this.course.entered(node, t, this.net.lag[node]));
  }

  /** Integral of a rate from one time to another, jumps at a node minded. */
  private passed(f: (t: number) => number, node: number, from: number, to: number): number {
    const breaks = [...(this.arrivals.jumps.get(node) ?? []), ...this.arrivals.breaks.flatMap((b) => [...b])];
    return quadrature(f, from, to, { breaks, relative: 1e-11, absolute: 1e-12 * this.size(), maxPieces: 20_000 }).value;
  }

  private mixingOf(node: number): { mixing: Mixing; values: Float64Array } {
    let known = this.mixings.get(node);
    if (!known) {
      const mixing = new Mixing(this.net, [node], this.put.entry);
      known = { mixing, values: new Float64Array(mixing.sources.length) };
      this.mixings.set(node, known);
    }
    return known;
  }

  /** Cells and blocks whose outflow is needed for what is looked at, or goes to a later stage or into a tube. */
  private wanted(looks: readonly number[]): Set<number> {
    const { sort, lag, stage, plant } = this.net;
    const wanted = new Set<number>();
    const brought = new Set<number>();
    const bring = (node: number): void => {
      if (brought.has(node)) return;
      brought.add(node);
      for (const source of this.mixingOf(node).mixing.sources) need(source);
    };
    const need = (node: number): void => {
      if (sort[node] === "joint") bring(node);
      else if (sort[node] === "cell" || sort[node] === "block") wanted.add(node);
    };
    looks.forEach(need);
    for (let i = 0; i < lag.length; i++) if (lag[i] > 0) bring(i);
    for (let k = 0; k < plant.from.length; k++) {
      if (stage[plant.from[k]] < stage[plant.to[k]]) need(plant.from[k]);
    }
    return wanted;
  }

  /** The node that most is put into. */
  private get node(): number {
    return [...this.put.entry].reduce((a, b) => (b[1] > a[1] ? b : a), [-1, -1])[0];
  }

  /**
   * Steps of a stage go on at about the pace at which others went when they made what now arrives: so nothing narrow that comes
   * out of a tube is stepped over.
   */
  private pace(own: number, stage: Stage, most: number, unit: number): (t: number) => number {
    const ways = this.waysInto(own, stage);
    const least = shortestStep * unit;
    return (t) => {
      let longest = most;
      for (const { from, delays } of ways) {
        const { history } = this.answers[from];
        let then = t;
        for (const { node, volume } of delays) if (then > 0) then = this.course.entered(node, then, volume);
        let next = history.stepAfter(then, stepsAtOnce);
        if (from !== own && next <= then) continue; // nothing more comes
        for (let i = delays.length - 1; i >= 0; i--) next = this.course.leaves(delays[i].node, next, delays[i].volume);
        longest = Math.min(longest, next - t);
      }
      return Math.max(longest, least);
    };
  }

  /** Where what arrives in a stage was integrated, and the delays that it has passed since, last first. */
  private waysInto(own: number, { mixing, held }: Stage): Way[] {
    const { sort, lag, looped, stage, block } = this.net;
    const ways = new Map<string, Way>();
    const add = (from: number, delays: Way["delays"]): void => {
      if (ways.size < mostWays) ways.set(`${from}:${delays.map((d) => d.node).join()}`, { from, delays });
    };
    const enter = (node: number, delays: Way["delays"]): void => {
      const passed = [...delays, { node, volume: lag[node] }];
      if (looped[node]) add(stage[node], passed);
      else if (ways.size < mostWays) for (const source of this.mixingOf(node).mixing.sources) come(source, passed);
    };
    const come = (node: number, delays: Way["delays"]): void => {
      if (sort[node] === "delay") enter(node, delays);
      else if (stage[node] !== own || delays.length > 0) add(stage[node], delays);
      if (sort[node] === "block" && (block[node]?.direct ?? 0) !== 0) enter(node, delays);
    };
    for (const source of mixing.sources) come(source, []);
    for (const h of held) if (h.target < 0) enter(h.node, []);
    return [...ways.values()];
  }

  /** All that is put in, for measure. */
  private size(): number {
    const { amount } = this.put.drive;
    return Math.abs(amount) + this.largestRate() * meanTime(this.net) || 1;
  }

  private scale(unit: number): number {
    const { amount } = this.put.drive;
    const q = this.course.through(this.node, 0) || this.net.plant.volume.active / unit;
    const before = this.put.before?.reduce((m, c) => Math.max(m, Math.abs(c)), 0) ?? 0;
    return Math.abs(amount) / (q * unit) + this.largestRate() / q + before || 1;
  }

  private largestRate(): number {
    const { level, slope, times } = this.put.drive;
    let most = 0;
    level.forEach((w, i) => {
      const end = times[i + 1] === undefined ? w : w + slope[i] * (times[i + 1] - times[i]);
      most = Math.max(most, Math.abs(w), Math.abs(end));
    });
    return this.put.asConcentration ? most * this.course.through(this.node, 0) : most;
  }
}

const nothing: StageAnswer = {
  history: { value: () => 0, integral: () => 0 } as unknown as StageAnswer["history"],
  signal: new Map(),
  inlet: new Map(),
  snapshot: undefined,
  steps: 0,
  stopped: undefined,
};

/** s; of a closed vessel: by its largest flow. */
export function meanTime({ plant }: Integrable): number {
  const fed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const flow = fed > 0 ? fed : plant.columns.inflow.reduce((most, q) => Math.max(most, q), 0);
  return flow > 0 ? plant.volume.active / flow || 1 : 1;
}
