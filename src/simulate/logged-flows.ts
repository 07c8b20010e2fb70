import { compiler } from "../compile/compile.js";
import { Part, type Plant, type Settings } from "../compile/plant.js";
import type { Series, Trial } from "../model/trial.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import { type FlowCourse, loggedCourse } from "./flow-course.js";

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
  const balance = balancer(plant, logs);
  const rows = [...new Set([...logs.values()].flatMap((log) => [...log.time]))].sort((a, b) => a - b);
  const knots: number[] = [];
  const flows: Balanced[] = [];
  const push = (t: number, row: Balanced): void => {
    knots.push(t);
    flows.push(row);
  };
  const between = (a: number, fa: Balanced, b: number, fb: Balanced, depth: number): void => {
    if (depth < mostHalvings && !balance.linear) {
      const middle = (a + b) / 2;
      const fm = balance.at(middle);
      const most = fm.links.reduce((m, q) => Math.max(m, q), 0);
      const bent = fm.links.some((q, k) => Math.abs(q - (fa.links[k] + fb.links[k]) / 2) > straight * most);
      if (bent) {
        between(a, fa, middle, fm, depth + 1);
        push(middle, fm);
        between(middle, fm, b, fb, depth + 1);
      }
    }
  };
  let before = balance.at(rows[0]);
  push(rows[0], before);
  for (let i = 1; i < rows.length; i++) {
    const next = balance.at(rows[i]);
    between(rows[i - 1], before, rows[i], next, 0);
    push(rows[i], next);
    before = next;
  }
  return loggedCourse(
    Float64Array.from(knots, (t) => t - start),
    flows.map((f) => f.links),
    flows.map((f) => f.nodes),
  );
}

interface Balanced {
  readonly links: Float64Array;
  readonly nodes: Float64Array;
}

/** The network balanced at the flows of a time. Where all flows are linear in those of the feeds, they are found once. */
function balancer(plant: Plant, logs: ReadonlyMap<string, Series>): { at(t: number): Balanced; linear: boolean } {
  const { compile } = compiler(plant.network);
  const feeds = [...logs.keys()];
  const means = feeds.map((f) => plant.feeds.find((p) => p.name === f)?.flow ?? 0);
  const solve = (q: readonly number[]): Balanced => {
    const settings: Record<string, number> = { ...(plant.settings as Settings | undefined) };
    feeds.forEach((f, i) => {
      settings[`${f}.flow`] = Math.max(q[i], standstill * means[i]);
    });
    const { plant: made, problems } = compile(settings);
    if (!made) throw new RefusedError(problems);
    return { links: made.flow, nodes: made.columns.inflow };
  };
  const q = (t: number): number[] =>
    feeds.map((f, i) => Math.max(logged(logs.get(f) as Series, t), standstill * means[i]));
  const base = solve(means);
  const apart = feeds.map((_, i) => solve(means.map((m, j) => (i === j ? 1.5 * m : m))));
  const combine = (flows: readonly number[]): Balanced => {
    const sum = (what: keyof Balanced): Float64Array =>
      base[what].map((b, k) =>
        Math.max(
          0,
          feeds.reduce((s, _, i) => s + ((flows[i] - means[i]) / (0.5 * means[i])) * (apart[i][what][k] - b), b),
        ),
      );
    return { links: sum("links"), nodes: sum("nodes") };
  };
  const extremes = feeds.flatMap((f) => {
    const { value } = logs.get(f) as Series;
    return [value.reduce((m, x) => Math.min(m, x)), value.reduce((m, x) => Math.max(m, x))];
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
  return { linear, at: (t) => (linear ? combine(q(t)) : solve(q(t))) };
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
