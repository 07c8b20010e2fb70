import type { Realization } from "../compartments/realization.js";
import { requireCarried } from "../compile/carried.js";
import { Part, type Plant } from "../compile/plant.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import { arrivals } from "./arrivals.js";
import { partsOf } from "./entry.js";
import { extrapolation } from "./extrapolation.js";
import { type FlowCourse, steadyCourse } from "./flow-course.js";
import { cut, haltSaid } from "./halts.js";
import { type Integrable, integrable } from "./integrable.js";
import { Integration, type Put } from "./integration.js";
import { type Drive, instant } from "./linear-system.js";
import type { TracerWay, Tracing } from "./tracing.js";
import { unrolledTracing } from "./unrolled-tracing.js";

/** Plants of more nodes, without blocks, are stepped explicitly where they are not stiff. */
const manyNodes = 1500;

/**
 * The balances in time: cells and blocks are states of a stiff integrator, tubes exact delays, a pulse an event with an
 * amount that no integrator meets. Works with every kind of body, and with flows that vary in time.
 */
export const ode: TracerWay = {
  name: "ode",
  trace(plant, entry, horizon) {
    requireCarried(plant, "ode");
    if (plant.columns.size > manyNodes && !plant.columns.part.includes(Part.Block)) {
      return unrolledTracing(plant, entry, horizon, extrapolation);
    }
    return integrate(plant, steadyCourse(plant), horizon, (drive) => ({ entry: partsOf(entry), drive }));
  },
};

/** Follows tracer through a plant whose flows take a course. */
export function integrate(plant: Plant, course: FlowCourse, horizon: number, putOf: (drive: Drive) => Put): Tracing {
  const realized = plant.nodes.map((n): Realization | undefined =>
    n.inflow > 0 ? n.block?.realize(n.inflow) : undefined,
  );
  const net = integrable(plant, realized);
  requireFewSteps(net, course, horizon);
  let last: { drive: Drive; looks: Set<number>; run: Integration; by: number } | undefined;
  const outlets = plant.outlets.map((o) => o.node);
  /** All that it tells of amounts and concentrations is to be taken `by` times. */
  const runOf = (drive: Drive, looks: readonly number[]): { run: Integration; by: number } => {
    const known = last?.drive === drive ? last : undefined;
    if (known && looks.every((i) => known.looks.has(i))) return known;
    const all = new Set([...(known?.looks ?? outlets), ...looks]);
    const put = putOf(drive);
    const by = measureOf(put);
    const run = new Integration(net, course, over(put, by), horizon, [...all]);
    last = { drive, looks: all, run, by };
    return last;
  };
  let unit: ReturnType<typeof arrivals> | undefined;
  return {
    get truncated() {
      return (last?.run.leftOut ?? 0) > 0;
    },
    passagesAt(node) {
      unit ??= arrivals(net, course, putOf(instant(1)).entry, instant(1), horizon);
      const direct = new Map((unit.jumps.get(node) ?? []).map((time): [number, number] => [time, 0]));
      for (const { time, amount } of unit.spikes.get(node) ?? []) direct.set(time, amount / course.through(node, time));
      return [...direct].map(([delay, share]) => ({ delay, direct: share })).sort((a, b) => a.delay - b.delay);
    },
    see(drive, looks) {
      const { run, by } = runOf(
        drive,
        looks.map((l) => l.node),
      );
      const seen = looks.map(({ node, times, lag = 0, integral = true }) => {
        const end = run.stopped?.t ?? Number.POSITIVE_INFINITY; // nothing is known later
        const all = lag > 0 ? run.lagged(node, lag, times) : times.map((t) => (t < 0 ? 0 : run.leaving(node, t, 1)));
        const value = all.map((c, i) => (times[i] > end ? Number.NaN : by * c));
        // What a detector has not shown yet, it holds.
        const sum = (t: number, i: number): number =>
          t < 0
            ? 0
            : t > end
              ? Number.NaN
              : by * (run.integral(node, t) + spikesUntil(run, node, t, course)) - lag * value[i];
        return { value, integral: integral && course.constant ? times.map(sum) : new Float64Array(times.length) };
      });
      const { stopped, complete } = run;
      const asked = looks.reduce((t, { times }) => Math.max(t, times[times.length - 1] ?? 0), 0);
      return {
        seen,
        stopped: stopped ? haltSaid(stopped.t, stopped.why, stopped.node) : cut(complete, asked),
      };
    },
    balance(drive, until) {
      const { run, by } = runOf(drive, []);
      const known = run.stopped && run.stopped.t < until ? Number.NaN : 1;
      const left = by * known * outlets.reduce((sum, node) => sum + run.left(node, until), 0);
      const inside = by * known * run.inside();
      const injected = by * run.injected(until);
      const recovered = left + inside;
      return {
        injected,
        left,
        inside,
        recovered,
        closure: injected > 0 ? Math.abs(injected - recovered) / injected : 0,
      };
    },
  };
}

/** Amounts are followed as they are between these; tolerances of others would fall out of what a double holds. */
const usual = { least: 1e-150, most: 1e150 };

/** What to take as one: a power of two, or 1. */
function measureOf({ drive, before }: Put): number {
  let size = Math.abs(drive.amount);
  for (const list of [drive.level, drive.slope, before ?? []]) for (const x of list) size = Math.max(size, Math.abs(x));
  if (!(size > 0) || !Number.isFinite(size) || (size > usual.least && size < usual.most)) return 1;
  return 2 ** Math.round(Math.log2(size));
}

function over(put: Put, by: number): Put {
  if (by === 1) return put;
  const { drive, before } = put;
  const part = (x: Float64Array): Float64Array => x.map((v) => v / by);
  return {
    ...put,
    drive: { ...drive, amount: drive.amount / by, level: part(drive.level), slope: part(drive.slope) },
    before: before && part(before),
  };
}

/** Steps that a loop with a short delay may need; at some 50 us each these are over in a quarter of a minute. */
const mostLoopSteps = 200_000;

/** @throws RefusedError where a delay in a loop is so short that steps no longer than it would not come to an end */
function requireFewSteps({ plant, looped, lag }: Integrable, course: FlowCourse, horizon: number): void {
  for (let i = 0; i < lag.length; i++) {
    if (!looped[i] || !(lag[i] > 0)) continue;
    const passes = horizon / course.shortest(i, lag[i]);
    const { name } = plant.nodes[i];
    if (passes > mostLoopSteps) throw new RefusedError([problem("loop-too-short", plant.network.at, { name, passes })]);
  }
}

function spikesUntil(run: Integration, node: number, t: number, course: FlowCourse): number {
  let sum = 0;
  for (const { time, amount } of run.spikes(node))
    if (time <= t * (1 + 2e-12)) sum += amount / course.through(node, time);
  return sum;
}
