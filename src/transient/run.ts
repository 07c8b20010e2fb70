import type { Halt } from "../numerics/odex.js";
import { arrivals } from "../simulate/arrivals.js";
import type { Drive } from "../simulate/linear-system.js";
import { Carried } from "./blends.js";
import type { FeedSignal } from "./feed-signal.js";
import { type ParcelSignal, parcelSignal } from "./parcel-signal.js";
import { Path } from "./path.js";
import { type PieceBasis, pieceBasis } from "./pieces.js";
import type { Scene } from "./scene.js";
import { MixedSignal, type Signal } from "./signal.js";
import { Stage } from "./stage.js";
import { type Fineness, type StageRun, stageRun } from "./stage-run.js";
import type { Start } from "./start.js";
import { startingState } from "./starting-state.js";
import { type TubeAsk, tubeSignal } from "./tube-signal.js";

/** Parts of the shortest delay of a loop that a step may take, and a piece of what leaves a tube: together they are less than it. */
const stepInLoop = 0.55;
const pieceInLoop = 0.4;
const aheadInLoop = 0.3;
/** Pieces of what comes from an earlier stage that one step may take in. */
const piecesAtOnce = 4;

/** Where a run ended too soon. */
export interface Stopped {
  readonly t: number;
  readonly why: Halt;
  readonly node: number;
}

/** What is asked of a run. */
export interface RunAsk extends Fineness {
  readonly scene: Scene;
  /** One per feed of the plant. */
  readonly feeds: readonly FeedSignal[];
  readonly start: Start;
  /** s */
  readonly horizon: number;
  /** Nodes whose outflow will be asked for. */
  readonly looks: readonly number[];
  readonly counted: boolean;
}

/**
 * Everything in a plant over time: stage by stage in flow order, tubes and bodies of parcels read off what entered them.
 * Integration stops wherever something that enters a stage jumps or kinks.
 */
export class Run {
  readonly basis: PieceBasis;
  readonly stages: { readonly stage: Stage; readonly run: StageRun; readonly first: Float64Array }[] = [];
  readonly stopped: Stopped | undefined;
  private readonly signals = new Map<number, Signal>();
  /** By stage, where something is integrated. */
  private readonly running: (StageRun | undefined)[] = [];
  /** Bodies of parcels that stay apart. */
  private readonly apart = new Map<number, ParcelSignal>();
  private readonly breaks: readonly Float64Array[];
  private readonly jumps: ReadonlyMap<number, Float64Array>;
  /** Shortest delay in the circles of each stage, s. */
  private readonly loop: Float64Array;

  constructor(readonly ask: RunAsk) {
    const { scene, relative, horizon } = ask;
    this.basis = pieceBasis(relative > 3e-5 ? 3 : relative > 3e-8 ? 5 : 7);
    const found = this.arrivals();
    this.breaks = found.breaks;
    this.jumps = found.jumps;
    this.loop = loops(scene);
    const wanted = this.wanted();
    for (let s = 0; s < scene.stages; s++) {
      const nodes = [...scene.stage.keys()].filter((i) => scene.stage[i] === s && this.isHeld(i));
      if (nodes.length === 0) continue;
      const stage = new Stage(scene, nodes, (source) => this.signal(source));
      const seen = nodes.flatMap((node, b) => (wanted.has(node) ? [b] : []));
      const loop = stepInLoop * this.loop[s];
      const sources = this.waitedFor(nodes);
      const first = this.startOf(stage);
      const run = stageRun(
        stage,
        {
          ...ask,
          basis: this.basis,
          until: horizon,
          breaks: this.breaks[s],
          wanted: seen,
          start: first,
          longest: (t) =>
            sources.reduce(
              (least, signal) => Math.min(least, Math.max(signal.pace(t, piecesAtOnce) - t, 1e-9 * horizon)),
              loop,
            ),
        },
        seen.map((b) => {
          const before = new Float64Array(scene.width);
          stage.outflow(b, first, before, 0);
          return before;
        }),
        scene.width,
      );
      this.stages.push({ stage, run, first });
      this.running[s] = run;
      for (const [body, pieces] of run.outflow) this.signals.set(nodes[body], pieces);
      run.go();
      if (run.stopped && !this.stopped) {
        this.stopped = { t: run.stopped.t, why: run.stopped.why, node: nodes[run.stopped.body] };
      }
    }
  }

  /** What leaves a node, or what a feed brings (the number of nodes plus its own). */
  signal(source: number): Signal {
    let signal = this.signals.get(source);
    if (!signal) {
      signal = this.made(source);
      this.signals.set(source, signal);
    }
    return signal;
  }

  /** What enters a node. */
  entering(node: number): Signal {
    const { blends, width } = this.ask.scene;
    const sources = Array.from(blends.sources(node), (source) => this.signal(source));
    return sources.length === 1 && !blends.apart ? sources[0] : new MixedSignal(sources, blends, node, width);
  }

  /** The way through a body of parcels. */
  path(node: number): Path {
    const { scene } = this.ask;
    const body = scene.follow[node];
    if (body?.is !== "parcels") throw new Error("a body that nobody follows");
    return new Path(scene.course, node, body.volume, body.lag / body.volume);
  }

  /** When what then was in a tube and was not smooth entered it: from now on backwards, s. */
  breaksWithin(node: number, at: number): number[] {
    const path = this.path(node);
    const entered = Array.from(this.jumps.get(node) ?? [], (t) => path.entered(t, 1));
    const all = [...entered, ...this.ask.scene.course.knots];
    const oldest = path.entered(at, 1);
    return all.filter((t) => t > oldest && t < at).sort((a, b) => b - a);
  }

  private made(source: number): Signal {
    const { scene, feeds, start, horizon } = this.ask;
    const { sort, follow } = scene;
    if (source >= sort.length) return feeds[source - sort.length];
    const body = follow[source];
    if (sort[source] === "joint" || sort[source] === "none") return this.entering(source);
    if (body?.is !== "parcels") throw new Error("a body that nobody asked for");
    const loop = scene.looped[source] ? pieceInLoop * this.loop[scene.stage[source]] : Number.POSITIVE_INFINITY;
    const late: { inlet?: Signal } = {};
    const inlet = (): Signal => {
      late.inlet ??= this.entering(source);
      return late.inlet;
    };
    const ask: TubeAsk = {
      scene,
      node: source,
      path: this.path(source),
      // In a circle of tubes what enters is known only once all are there.
      inlet: {
        read: (t, side, out, to) => inlet().read(t, side, out, to),
        integral: (t, out) => inlet().integral(t, out),
        pace: (t, count) => (scene.looped[source] ? Number.POSITIVE_INFINITY : inlet().pace(t, count)),
      },
      start,
      basis: this.basis,
      breaks: sorted([...(this.jumps.get(source) ?? []), ...scene.course.knots].filter((t) => t >= 0)),
      longest: () => Math.min(loop, horizon),
    };
    if (!body.stays) return tubeSignal(ask);
    const entries = this.entries(source);
    const apart = parcelSignal({
      ...ask,
      stays: body.stays,
      horizon,
      // In a circle with cells as far as these have come; in one without, a little ahead of what has left.
      known: (until) =>
        scene.looped[source]
          ? Math.max(
              until,
              this.running[scene.stage[source]]?.at ?? until + aheadInLoop * this.loop[scene.stage[source]],
            )
          : Number.POSITIVE_INFINITY,
      entries,
      entering: this.enteringBefore(source),
    });
    this.apart.set(source, apart);
    return apart.signal;
  }

  /** What a body of parcels that stay apart holds over its volume, once its signal is there. */
  inside(node: number, t: number, out: Float64Array): void {
    this.signal(node);
    if (!this.apart.get(node)?.inside(t, out)) out.fill(Number.NaN);
  }

  /** Times at which what enters a node may jump or kink. */
  entries(node: number): Float64Array {
    const { scene, feeds } = this.ask;
    const times = [...scene.blends.sources(node)].flatMap((source) =>
      source < scene.sort.length
        ? Array.from(this.jumps.get(source) ?? [])
        : Array.from(feeds[source - scene.sort.length].times),
    );
    return sorted([...times, ...scene.course.knots].filter((t) => t >= 0));
  }

  /** What entered a node before, in balance; nothing where it starts with what it holds. */
  enteringBefore(node: number): Float64Array {
    const { scene, start, feeds } = this.ask;
    const mixture = new Float64Array(scene.width);
    if (start.is !== "steady") return mixture;
    const { blends, course } = scene;
    const parts = blends.by(course.at(0, -1));
    const warm = blends.apart ? blends.by(course.at(0, -1), Carried.warmth) : parts;
    blends.sources(node).forEach((source, j) => {
      const part = parts[blends.first(node) + j];
      const leaving = new Float64Array(scene.width);
      if (source < scene.sort.length) leaving.set(start.leaving(source));
      else feeds[source - scene.sort.length].read(-1, -1, leaving, 0);
      const last = scene.width - 1;
      for (let i = 0; i < last; i++) mixture[i] += part * leaving[i];
      mixture[last] += warm[blends.first(node) + j] * leaving[last];
    });
    return mixture;
  }

  private isHeld(node: number): boolean {
    const { sort, follow } = this.ask.scene;
    return sort[node] === "cell" || follow[node]?.is === "states";
  }

  /** Signals from earlier stages that a stage takes in. */
  private waitedFor(nodes: readonly number[]): Signal[] {
    const { scene } = this.ask;
    const own = new Set(nodes);
    const sources = new Set<number>();
    for (const node of nodes) {
      if (!(scene.plant.columns.inflow[node] > 0)) continue;
      for (const source of scene.blends.sources(node)) {
        const before = source < scene.sort.length && scene.stage[source] < scene.stage[node];
        if (!own.has(source) && source < scene.sort.length && (before || !scene.looped[source])) sources.add(source);
      }
    }
    return [...sources].map((source) => this.signal(source));
  }

  private startOf(stage: Stage): Float64Array {
    const { scene, start } = this.ask;
    return startingState(scene, stage, start, (node) => this.enteringBefore(node));
  }

  /** Bodies whose outflow is needed for what is looked at, for another stage, or by a tube. */
  private wanted(): Set<number> {
    const { scene, looks } = this.ask;
    const wanted = new Set<number>();
    const need = (source: number): void => {
      if (source >= scene.sort.length) return;
      if (this.isHeld(source)) wanted.add(source);
      else if (scene.sort[source] === "joint") for (const s of scene.blends.sources(source)) need(s);
    };
    looks.forEach(need);
    for (let i = 0; i < scene.sort.length; i++) {
      if (!(scene.plant.columns.inflow[i] > 0) || scene.sort[i] === "joint") continue;
      for (const source of scene.blends.sources(i)) {
        const later = source < scene.sort.length && scene.stage[source] < scene.stage[i];
        if (later || scene.follow[i]?.is === "parcels") need(source);
      }
    }
    return wanted;
  }

  /** When what enters a stage, or leaves a node, is not smooth. */
  private arrivals(): { breaks: Float64Array[]; jumps: Map<number, Float64Array> } {
    const { scene, feeds, start, horizon } = this.ask;
    const { plant, net } = scene;
    // What is on its way at the end counts, too.
    const { course } = scene;
    const end = scene.follow.reduce(
      (late, f, i) => (f?.is === "parcels" ? Math.max(late, course.leaves(i, horizon, f.lag)) : late),
      horizon,
    );
    const found: ReturnType<typeof arrivals>[] = [];
    const look = (entry: Map<number, number>, times: readonly number[]): void => {
      if (entry.size === 0 || times.length === 0) return;
      // Any jump will do: only when and where are asked.
      const drive: Drive = {
        amount: 0,
        times: Float64Array.from(times),
        level: Float64Array.from(times, (_, i) => (i % 2 === 0 ? 1 : 0)),
        slope: new Float64Array(times.length),
      };
      found.push(arrivals(net, course, entry, drive, end));
    };
    plant.feeds.forEach(({ node }, k) => {
      const times = [...new Set(feeds[k].times)].filter((t) => feeds[k].times.length > 1 && t >= 0 && t <= horizon);
      look(new Map([[node, 1]]), times);
    });
    // What flows on the way changes, and with it how long it stays, and what junctions mix.
    const turns = [...new Set(course.knots)].filter((t) => t >= 0 && t <= horizon);
    const through = [...scene.sort.keys()].filter((i) => scene.sort[i] !== "none");
    look(new Map(through.map((i) => [i, 1])), turns);
    // Where things start otherwise than what enters, the front between goes through everything.
    if (start.is === "contents") {
      const all = [...scene.sort.keys()].filter((i) => scene.sort[i] !== "none" && scene.sort[i] !== "joint");
      look(new Map(all.map((i) => [i, 1])), [0]);
    }
    const breaks = Array.from({ length: scene.stages }, (_, s) => sorted(found.flatMap((f) => [...f.breaks[s]])));
    const jumps = new Map<number, Float64Array>();
    for (let i = 0; i < scene.sort.length; i++) {
      const times = found.flatMap((f) => f.jumps.get(i) ?? []);
      if (times.length > 0) jumps.set(i, sorted(times));
    }
    return { breaks, jumps };
  }
}

/** Each once, ascending. */
function sorted(times: number[]): Float64Array {
  const all = times.sort((a, b) => a - b);
  return Float64Array.from(all.filter((t, i) => i === 0 || t - all[i - 1] > 1e-12 * t));
}

/** By stage, the shortest delay in a circle; Infinity where there is none. */
function loops({ stages, stage, looped, follow, sort, course }: Scene): Float64Array {
  const shortest = new Float64Array(stages).fill(Number.POSITIVE_INFINITY);
  follow.forEach((f, i) => {
    if (looped[i] && f?.is === "parcels" && sort[i] !== "joint")
      shortest[stage[i]] = Math.min(shortest[stage[i]], course.shortest(i, f.lag));
  });
  return shortest;
}
