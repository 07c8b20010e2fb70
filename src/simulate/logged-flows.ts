import { compiler } from "../compile/compile.js";
import { Part, type Plant, type Settings } from "../compile/plant.js";
import type { Series, Trial } from "../model/trial.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import { type FlowCourse, loggedCourse, nodeFlows } from "./flow-course.js";

/** A feed that stops goes on at this part of its mean: what stands still has no direction. */
const standstill = 1e-9;
/** Flows between two knots may bend away from a straight line by this part of the largest before a knot is put between. */
const straight = 1e-6;
const mostHalvings = 12;

/**
 * The flows of a plant over time, from the logs of its feeds: the network is balanced at every row, and all flows are linear in
 * between. Where an expression bends them, rows are put between until they are, to 1e-6.
 * @param plant compiled for the constants of the day
 * @param start what the course calls 0, s on the trial's clock
 * @throws RefusedError where a flow of the log makes the network impossible
 */
export function courseOf(plant: Plant, logs: ReadonlyMap<string, Series>, start: number): FlowCourse {
  const times = [...new Set([...logs.values()].flatMap((log) => [...log.time]))].sort((a, b) => a - b);
  const rows = times.map((t) => ({ t: t - start, flows: [...logs.values()].map((log) => logged(log, t)) }));
  return courseThrough(plant, [...logs.keys()], rows);
}

/** What some feeds bring at a time, m3/s; straight from row to row, two at one time are a jump. */
export interface FlowRow {
  /** s */
  readonly t: number;
  readonly flows: readonly number[];
}

/**
 * The flows of a plant over time, from those of its feeds.
 * @param plant compiled for what is not in the rows
 * @param feeds names, one per flow of a row
 * @param rows ascending
 * @param inspect is shown every plant that is compiled on the way
 * @throws RefusedError where a flow makes the network impossible
 */
export function courseThrough(
  plant: Plant,
  feeds: readonly string[],
  rows: readonly FlowRow[],
  inspect: (made: Plant) => void = () => undefined,
): FlowCourse {
  const balance = balancer(plant, feeds, rows, inspect);
  const knots: number[] = [];
  const flows: Balanced[] = [];
  const push = (t: number, row: Balanced): void => {
    knots.push(t);
    flows.push(row);
  };
  const between = (a: FlowRow, fa: Balanced, b: FlowRow, fb: Balanced, depth: number): void => {
    if (depth >= mostHalvings || balance.linear || !(b.t > a.t)) return;
    const middle = { t: (a.t + b.t) / 2, flows: a.flows.map((q, i) => (q + b.flows[i]) / 2) };
    const fm = balance.at(middle.flows);
    const most = fm.links.reduce((m, q) => Math.max(m, q), 0);
    const bent = fm.links.some((q, k) => Math.abs(q - (fa.links[k] + fb.links[k]) / 2) > straight * most);
    if (bent) {
      between(a, fa, middle, fm, depth + 1);
      push(middle.t, fm);
      between(middle, fm, b, fb, depth + 1);
    }
  };
  let before = balance.at(rows[0].flows);
  push(rows[0].t, before);
  for (let i = 1; i < rows.length; i++) {
    const next = balance.at(rows[i].flows);
    between(rows[i - 1], before, rows[i], next, 0);
    push(rows[i].t, next);
    before = next;
  }
  return loggedCourse(
    Float64Array.from(knots),
    flows.map((f) => f.links),
    flows.map((f) => f.nodes),
  );
}

interface Balanced {
  readonly links: Float64Array;
  /** Those of the feeds behind those of the nodes. */
  readonly nodes: Float64Array;
}

/** The network balanced at the flows of feeds. Where all flows are linear in these, they are found once. */
function balancer(
  plant: Plant,
  feeds: readonly string[],
  rows: readonly FlowRow[],
  inspect: (made: Plant) => void,
): { at(flows: readonly number[]): Balanced; linear: boolean } {
  const { compile } = compiler(plant.network);
  const means = feeds.map((f) => plant.feeds.find((p) => p.name === f)?.flow ?? 0);
  const solve = (q: readonly number[]): Balanced => {
    const settings: Record<string, number> = { ...(plant.settings as Settings | undefined) };
    feeds.forEach((f, i) => {
      settings[`${f}.flow`] = Math.max(q[i], standstill * means[i]);
    });
    const { plant: made, problems } = compile(settings);
    if (!made) throw new RefusedError(problems);
    inspect(made);
    return { links: made.flow, nodes: nodeFlows(made) };
  };
  const base = solve(means);
  const apart = feeds.map((_, i) => solve(means.map((m, j) => (i === j ? 1.5 * m : m))));
  const combine = (asked: readonly number[]): Balanced => {
    const flows = asked.map((q, i) => Math.max(q, standstill * means[i]));
    const sum = (what: keyof Balanced): Float64Array =>
      base[what].map((b, k) =>
        Math.max(
          0,
          feeds.reduce((s, _, i) => s + ((flows[i] - means[i]) / (0.5 * means[i])) * (apart[i][what][k] - b), b),
        ),
      );
    return { links: sum("links"), nodes: sum("nodes") };
  };
  const extremes = feeds.flatMap((_, i) => {
    const all = rows.map((row) => row.flows[i]);
    return [all.reduce((m, x) => Math.min(m, x)), all.reduce((m, x) => Math.max(m, x))];
  });
  // Tried where all are small, where all are large, and at each alone.
  const trials = [
    ...feeds.map((_, i) => means.map((m, j) => Math.max(standstill * m, i === j ? extremes[2 * i] : m))),
    ...feeds.map((_, i) => means.map((m, j) => (i === j ? extremes[2 * i + 1] : m))),
    means.map((m, i) => Math.max(standstill * m, extremes[2 * i])),
    means.map((_, i) => extremes[2 * i + 1]),
    means.map((m, i) => (m + 2 * extremes[2 * i + 1]) / 3),
  ];
  const largest = base.links.reduce((m, x) => Math.max(m, x), 0);
  const linear = trials.every((flows) => {
    const [found, wanted] = [combine(flows), solve(flows)];
    return wanted.links.every((w, k) => Math.abs(w - found.links[k]) <= 1e-11 * Math.max(largest, w));
  });
  return { linear, at: (flows) => (linear ? combine(flows) : solve(flows)) };
}

/** Straight between rows, the first before and the last after. */
function logged({ time, value }: Series, t: number): number {
  const last = time.length - 1;
  if (t <= time[0]) return value[0];
  if (t >= time[last]) return value[last];
  let [low, high] = [0, last];
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (time[middle] <= t) low = middle;
    else high = middle;
  }
  const span = time[high] - time[low];
  return span > 0 ? value[low] + ((t - time[low]) / span) * (value[high] - value[low]) : value[high];
}

/** What cannot be followed while flows vary. @throws RefusedError */
export function requireVarying(plant: Plant, trial: Trial): void {
  const what = (text: string) => new RefusedError([problem("not-yet", trial.at, { what: text })]);
  const { tracer, injections } = trial;
  if (tracer?.loss || tracer?.retained?.length)
    throw what("a tracer that is lost or held back, beside a flow that is a log,");
  if (trial.contents) throw what("`contents` beside a flow that is a log");
  for (const { form, at } of injections) {
    const washed = form.is === "step" && form.from !== undefined && form.from.of(plant.env) > 0;
    const fedThere = plant.feeds.length === 1 && plant.feeds[0].name === at;
    if (washed && !(fedThere && form.from?.dimension[0] === -3)) {
      throw what("a step `from` a level other than that of the only feed, beside a flow that is a log,");
    }
  }
  plant.nodes.forEach(({ part, block, inflow, name }) => {
    if (part !== Part.Block || !block || !block.realize(inflow)?.steadyOnly) return;
    const body = plant.network.compartments.find((c) => c.name === name) ?? plant.network;
    throw new RefusedError([problem("flows-vary-body", body.at, { name, is: block.is })]);
  });
}
