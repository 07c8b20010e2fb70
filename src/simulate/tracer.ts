import type { Plant } from "../compile/plant.js";
import { isClosed } from "../model/network.js";
import { ascending } from "../numerics/ascending.js";
import { constantRate, instant } from "./linear-system.js";
import { moments, type NodeMoments, noMoments } from "./moments.js";
import type { Balance } from "./respond.js";
import { type AnyEngine, engineFor, trace } from "./trace.js";
import type { WatchTracing } from "./tracing.js";

export interface TracerOptions {
  /** Default: the exact one where it carries the plant, else laplace. */
  readonly engine?: AnyEngine;
  /** Inner places to look at, by name, besides the outlets. */
  readonly at?: readonly string[];
  /** Told now and then how far a long run has got; true ends it. */
  readonly watch?: WatchTracing;
}

/**
 * A curve at one place. `value` and `cumulative` per unit of tracer, as the contract of `simulate` says. In a closed vessel
 * volume stands for flow: `value` after a pulse is c V / amount and tends to 1; areas are times.
 */
export interface TracerReading {
  readonly at: string;
  /** Pulse: c Q / amount, 1/s, without its spikes. Step: c / c_in. */
  readonly value: Float64Array;
  /** Integral of the pulse curve, spikes included: F where the place is the only outlet. */
  readonly cumulative: Float64Array;
  /** Undispersed parts: when (s) and how much of the area of `value` (0 to 1 and beyond where c Q / amount is). */
  readonly spikes: readonly { readonly time: number; readonly area: number }[];
  /** Area of the spikes that were too small or too many to list. */
  readonly spikesLeftOut: number;
  /** In a closed vessel, which nothing leaves: share 0, the others undefined. */
  readonly moments: NodeMoments;
  /** Area of `value` over all time: share * Q / flow through the place. */
  readonly area: number;
}

export interface TracerResult {
  readonly engine: string;
  /** s */
  readonly times: Float64Array;
  readonly readings: readonly TracerReading[];
  readonly balance: Balance;
  readonly stopped: string | undefined;
  readonly truncated: boolean;
}

/** A unit pulse or step into a feed or a compartment. */
export interface UnitInjection {
  readonly at: string;
  readonly form: "pulse" | "step";
}

const mostSpikes = 10_000;
const smallestSpike = 1e-12;

/**
 * The tracer curve at every outlet (and at inner places asked for) after a unit pulse or step.
 * @param times s, ascending, from the injection on
 * @throws RangeError where times do not ascend or are not finite, or there is no such place or form
 * @returns curves in outlet order, then `options.at`; `stopped` says where an integrator gave up, with what it has
 */
export function tracerResponse(
  plant: Plant,
  injection: UnitInjection,
  times: ArrayLike<number>,
  options: TracerOptions = {},
): TracerResult {
  const entry = plant.entry.get(injection.at);
  if (entry === undefined) throw new RangeError(`no place '${injection.at}' in the network`);
  const clock = ascending(times);
  if (injection.form !== "pulse" && injection.form !== "step") throw new RangeError(`no form '${injection.form}'`);
  const until = clock[clock.length - 1] ?? 0;
  const engine = options.engine ?? engineFor(plant, until);
  const flow = measureOf(plant, injection.at);
  const tracing = trace(plant, entry, until, engine, options.watch);
  const drive = injection.form === "pulse" ? instant(1) : constantRate(1);
  if (isClosed(plant) && injection.form === "step") throw new RangeError("nothing enters a closed vessel: no step");
  const places = [...plant.outlets.map((o) => o.name), ...(options.at ?? [])];
  const nodes = places.map((name) => exitOf(plant, name));
  const { seen, stopped } = tracing.see(
    drive,
    nodes.map((node) => ({ node, times: clock })),
  );
  // In large networks they cost more than the curves: found when they are asked for.
  const found = once(() => (isClosed(plant) ? undefined : moments(plant, entry, nodes)));
  const readings = places.map((at, i): TracerReading => {
    const node = nodes[i];
    const pulse = injection.form === "pulse";
    const value = seen[i].value.map((c) => c * flow);
    const inflow = plant.columns.inflow[node];
    return {
      at,
      value,
      cumulative: pulse ? seen[i].integral.map((c) => c * flow) : value,
      ...spikesOf(tracing.passagesAt(node), flow, pulse),
      get moments() {
        return found()?.[i] ?? noMoments;
      },
      get area() {
        const share = found()?.[i].share ?? 0;
        return inflow > 0 ? (share * flow) / inflow : 0;
      },
    };
  });
  return {
    engine: engine.name,
    times: clock,
    readings,
    balance: tracing.balance(drive, until),
    stopped,
    truncated: tracing.truncated,
  };
}

/** Does a job when its result is first asked for. */
function once<T>(job: () => T): () => T {
  let done: { readonly result: T } | undefined;
  return () => {
    done ??= { result: job() };
    return done.result;
  };
}

/** The node whose outflow a place of the file stands for. */
export function exitOf(plant: Plant, name: string): number {
  const node = plant.exit.get(name);
  if (node === undefined) throw new RangeError(`no place '${name}' in the network`);
  return node;
}

/**
 * What makes a concentration after a unit of tracer a number to compare: the flow of the feed injected into, or of all feeds,
 * m3/s. In a closed vessel its volume, m3: the curve then ends at 1.
 */
function measureOf(plant: Plant, at: string): number {
  if (isClosed(plant)) return plant.volume.active;
  const feed = plant.feeds.find((f) => f.name === at);
  return feed ? feed.flow : plant.feeds.reduce((sum, f) => sum + f.flow, 0);
}

function spikesOf(
  passages: readonly { readonly delay: number; readonly direct: number }[],
  flow: number,
  pulse: boolean,
) {
  const spikes: { time: number; area: number }[] = [];
  let spikesLeftOut = 0;
  if (pulse) {
    for (const p of passages) {
      const area = p.direct * flow;
      if (area > smallestSpike && spikes.length < mostSpikes) spikes.push({ time: p.delay, area });
      else spikesLeftOut += area;
    }
  }
  return { spikes, spikesLeftOut };
}

/**
 * When the curve is over: the time at which F reaches `level` of its end at every outlet, at most `mostMeans` mean times. s.
 * @param entry name of the place injected into
 */
export function settlingTime(plant: Plant, at: string, level = 0.999, mostMeans = 20): number {
  const total = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const entry = plant.entry.get(at) as number;
  const { outlets } = plant;
  const found = moments(
    plant,
    entry,
    outlets.map((o) => o.node),
  );
  // What does not divide as the liquid does may stay much longer.
  const own = plant.follows === undefined ? [] : found.map((m) => m.mean).filter(Number.isFinite);
  const most = mostMeans * Math.max(plant.volume.active / total, ...own);
  if (!(most > 0)) return 1;
  const times = Float64Array.from({ length: 800 }, (_, i) => (most * (i + 1)) / 800);
  let until = 0;
  // Most curves are over long before the end, and a long run costs more than a short one.
  for (const clock of [times.subarray(0, 200), times.subarray(0, 400), times]) {
    const looks = outlets.map(({ node }) => ({ node, times: clock }));
    const { seen } = trace(plant, entry, clock[clock.length - 1]).see(instant(1), looks);
    const over = outlets.flatMap((o, i) => {
      const goal = (level * found[i].share) / (o.flow || 1);
      return found[i].share > 0 ? [seen[i].integral.findIndex((f) => f >= goal)] : [];
    });
    if (over.includes(-1)) until = most;
    else {
      until = over.reduce((late, i) => Math.max(late, clock[i]), 0);
      break;
    }
  }
  return until || most;
}
