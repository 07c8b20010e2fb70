import { requireCarried } from "../compile/carried.js";
import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { ascending } from "../numerics/ascending.js";
import type { Halt } from "../numerics/odex.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import { type Conditions, conditionsOf, type DutySettings } from "../reaction/conditions.js";
import { conservedBy } from "../reaction/conserved.js";
import { holdings } from "../reaction/holdings.js";
import { depleted } from "../reaction/kinetics.js";
import { steadyState } from "../reaction/steady.js";
import { type Amounts, amountsOf, closureOf, conservedClosure } from "./balance.js";
import { Cooled } from "./cooled.js";
import { changes } from "./course-line.js";
import { flowsOf } from "./flows.js";
import { feedSignals } from "./inputs.js";
import { Run } from "./run.js";
import { sceneOf } from "./scene.js";
import type { Signal } from "./signal.js";
import type { Start } from "./start.js";

export interface TransientOptions {
  /** Values in place of the duty's (`DutySettings`), SI; `feed.A.to` is what an upset goes to. */
  readonly settings?: DutySettings;
  /** Places whose outflow is wanted beside the outlets; default: all compartments. */
  readonly at?: readonly string[];
  /** Relative tolerance of a step; default 1e-9. */
  readonly relative?: number;
  /** Absolute tolerance, as a share of the concentration scale of each species; default 1e-12. */
  readonly absolute?: number;
  /** Steps after which a stage is given up; default 1e6. */
  readonly maxSteps?: number;
  /** False leaves the balances out: for many runs in a row. */
  readonly balance?: boolean;
}

/** What leaves a place over time, SI. */
export interface Course {
  readonly name: string;
  /** m3/s; of one that changes, before. */
  readonly flow: number;
  /** m3/s at times[k], where flows change. */
  readonly flows: Float64Array | undefined;
  /** values[k * species + i] at times[k]. */
  readonly values: Float64Array;
  /** K at times[k], where heat is balanced. */
  readonly temperatures: Float64Array | undefined;
}

/** How a vessel goes from one state to another. SI; species by their index in `species`. */
export interface Transient {
  readonly species: readonly string[];
  /** s, ascending. */
  readonly times: Float64Array;
  readonly start: Start["is"];
  readonly outlets: readonly Course[];
  readonly places: readonly Course[];
  /** Undefined where it was not asked for, or the run ended too soon. */
  readonly balance: TransientBalance | undefined;
  /** Where it ended too soon, s: values from there on are NaN. */
  readonly stopped: { readonly t: number; readonly why: Halt | "no steady state"; readonly node: string } | undefined;
  readonly steps: number;
  /** What leaves an outlet or one of the places asked for, at any time up to the last, SI. */
  readonly look: (name: string) => Look;
  /** Writes what all feeds together bring at t, amount per second by species; of a jump, before it. */
  readonly fed: (t: number, out: Float64Array) => void;
  /** m3/s that a feed brings at t; of a jump, before it. */
  readonly feedFlow: (feed: string, t: number) => number;
}

/** Components: the species and, where heat is balanced, the temperature; as many as the array takes. */
export interface Look {
  /** Writes what is there at t (s); of a jump, what is after it. */
  at(t: number, out: Float64Array, side?: number): void;
  /** Integral from 0 to t, concentration times s. */
  integral(t: number, out: Float64Array): void;
  /** m3/s that leave, and the m3 that have by t. */
  flow(t: number, side?: number): number;
  volume(t: number): number;
  /** Amounts that have left by t, of the species. */
  left(t: number, out: Float64Array): void;
  /** Where the smooth stretch ends that begins at t, s; Infinity where it does not. */
  stretch(t: number): number;
}

/** Balances that are off by more are not closed, as a share. */
export const closes = 1e-6;

/** Amounts over the whole run by species (mol, kg or a number, as the species is counted). */
export interface TransientBalance extends Amounts {
  /**
   * (fed + held before + made - left - held) as a share of the largest of them; 0 is a closed balance. What parcels make is
   * counted from the rates along their ways, and asks nothing of what is held or leaves; what cells make is what each step
   * changed, less what flowed.
   */
  readonly closure: Float64Array;
  /** How far sums that no reaction changes (elements, say) fail to close, the largest, as a share. */
  readonly conserved: number;
  /** The same as `closure` of heat, where it is balanced. */
  readonly heat: number | undefined;
  /** The largest of all these; above `closes` the run is not to be relied on. */
  readonly off: number;
}

/**
 * A duty in time: start-up, shut-down, a change of grade, an upset, a batch. It starts with the duty's `contents`; without
 * them, where something that is fed changes in time, in the steady state before that, and else with liquid that holds none of the
 * species.
 *
 * Cells and dispersed bodies are integrated together (Radau IIA, sparse exact Jacobian, stopping wherever something that enters
 * jumps); tubes are followed as parcels, so that a front stays a front. Volumes stay while flows change. Relative accuracy is about 1e-8 at the default tolerance.
 * @param times s, ascending, from 0
 * @throws RefusedError where the network or the duty holds something that cannot be followed in time yet
 * @see the methods beside their code in `src/transient` and `src/numerics`
 */
export function transient(
  plant: Plant,
  chemistry: Chemistry | undefined,
  duty: Duty,
  times: ArrayLike<number>,
  options: TransientOptions = {},
): Transient {
  requireCarried(plant, "transient");
  requireSteadyExchangers(duty);
  const settings = options.settings ?? {};
  const conditions = conditionsOf(plant, chemistry, duty, settings);
  const flows = flowsOf(plant, duty, settings);
  const scene = sceneOf(plant, conditions, flows);
  const { species } = conditions;
  const clock = ascending(times);
  const start = startOf(plant, chemistry, duty, conditions, settings);
  const names = (options.at ?? plant.network.compartments.map((c) => c.name)).filter((name) => plant.exit.has(name));
  const nodeOf = (name: string): number => plant.exit.get(name) as number;
  const horizon = clock[clock.length - 1] ?? 0;
  if (typeof start === "string") return nothing(plant, species, clock, names, start);
  const run = new Run({
    scene,
    feeds: feedSignals(plant, conditions, duty, settings, flows.knots),
    start,
    horizon,
    looks: [...plant.outlets.map((o) => o.node), ...names.map(nodeOf)],
    relative: options.relative ?? 1e-9,
    absolute: options.absolute ?? 1e-12,
    maxSteps: options.maxSteps ?? 1e6,
    counted: options.balance !== false,
  });
  const end = run.stopped?.t ?? Number.POSITIVE_INFINITY;
  const n = species.length;
  const toSi = (out: Float64Array): void => {
    for (const i of conditions.spends) if (out[i] <= depleted) out[i] = 0;
    for (let i = 0; i < scene.width; i++) out[i] = Math.max(out[i], 0) * conditions.scale[i];
  };
  const leaving = (name: string, node: number): Signal => {
    const signal = run.signal(node);
    const warming = scene.warmings.find((w) => w.from === node && plant.outlets.some((o) => o.name === name));
    if (!warming) return signal;
    const drop = (warming.gain * plant.feeds[warming.feed].flow) / plant.columns.inflow[node];
    return new Cooled(signal, run.ask.feeds[warming.feed], drop, scene.width);
  };
  const course = (name: string, node: number): Course => {
    const values = new Float64Array(clock.length * n);
    const temperatures = scene.width > n ? new Float64Array(clock.length) : undefined;
    const row = new Float64Array(scene.width);
    const seen = plant.columns.inflow[node] > 0 || scene.sort[node] === "cell";
    const signal = seen ? leaving(name, node) : undefined;
    clock.forEach((t, k) => {
      if (t > end || !signal) row.fill(Number.NaN);
      else signal.read(t, 1, row, 0);
      toSi(row);
      values.set(row.subarray(0, n), k * n);
      if (temperatures) temperatures[k] = row[n];
    });
    const changing = flows.constant ? undefined : clock.map((t) => flows.through(node, t, 1));
    return { name, flow: plant.columns.inflow[node], flows: changing, values, temperatures };
  };
  const outlets = plant.outlets.map((o) => course(o.name, o.node));
  return {
    species,
    times: clock,
    start: start.is,
    outlets,
    places: names.map((name) => course(name, nodeOf(name))),
    balance: options.balance === false || run.stopped ? undefined : balanceOf(run, plant, conditions),
    stopped: run.stopped && { t: run.stopped.t, why: run.stopped.why, node: plant.columns.nameOf(run.stopped.node) },
    steps: run.stages.reduce((sum, s) => sum + s.run.steps, 0),
    feedFlow(feed, t) {
      const k = plant.feeds.findIndex((f) => f.name === feed);
      return flows.through(scene.sort.length + k, t, -1);
    },
    fed(t, out) {
      const row = new Float64Array(scene.width);
      out.fill(0);
      plant.feeds.forEach((_, k) => {
        const flow = flows.through(scene.sort.length + k, t, -1);
        run.ask.feeds[k].read(t, -1, row, 0);
        for (let i = 0; i < n; i++) out[i] += flow * row[i] * conditions.scale[i];
      });
    },
    look(name) {
      const node = plant.outlets.find((o) => o.name === name)?.node ?? nodeOf(name);
      const signal = leaving(name, node);
      const row = new Float64Array(scene.width);
      return {
        at(t, out, side = 1) {
          signal.read(t, side, row, 0);
          toSi(row);
          out.set(row.subarray(0, out.length));
        },
        integral(t, out) {
          signal.integral(t, row);
          for (let i = 0; i < out.length; i++) out[i] = row[i] * conditions.scale[i];
        },
        flow: (t, side = 1) => flows.through(node, t, side),
        volume: (t) => flows.passed(node, 0, t),
        left(t, out) {
          if (flows.constant) signal.integral(t, row);
          else signal.integral(t, row, (u, side) => flows.through(node, u, side));
          const factor = flows.constant ? flows.through(node, 0) : 1;
          for (let i = 0; i < out.length; i++) out[i] = factor * row[i] * conditions.scale[i];
        },
        stretch(t) {
          signal.read(t, 1, row, 0);
          return signal.pace(t, 1);
        },
      };
    },
  };
}

/** How much an exchanger passes hangs on the flows. @throws RefusedError */
function requireSteadyExchangers({ heat, flowCourses }: Duty): void {
  if (!flowCourses || flowCourses.size === 0) return;
  const refused = (heat?.exchangers ?? []).map(({ at, feed }) =>
    problem("not-yet", at, { what: `\`heat-exchange\` (of '${feed}') in a transient beside a flow that changes` }),
  );
  if (refused.length > 0) throw new RefusedError(refused);
}

function startOf(
  plant: Plant,
  chemistry: Chemistry | undefined,
  duty: Duty,
  conditions: Conditions,
  settings: DutySettings,
): Start | string {
  if (duty.contents || !changes(duty)) {
    return { is: "contents", holding: holdings(plant, conditions, duty.contents, settings) };
  }
  const { converged, concentrations, temperatures, worst } = steadyState(plant, chemistry, duty, settings);
  if (!converged) return worst?.node ?? "";
  const { scale } = conditions;
  const n = conditions.species.length;
  return {
    is: "steady",
    leaving: (node) =>
      Float64Array.from(scale, (s, i) => ((i < n ? concentrations[node * n + i] : temperatures?.[node]) || 0) / s),
  };
}

function balanceOf(run: Run, plant: Plant, { species, scale, numbers }: Conditions): TransientBalance {
  const amounts = amountsOf(run, plant);
  const n = species.length;
  const toSi = (x: Float64Array): Float64Array => Float64Array.from(species, (_, i) => scale[i] * x[i]);
  const closure = closureOf(amounts);
  const conserved = conservedClosure(conservedBy(numbers, n), amounts);
  const worst = Math.max(conserved, ...Array.from(closure, Math.abs));
  return {
    fed: toSi(amounts.fed),
    left: toSi(amounts.left),
    made: toSi(amounts.made),
    before: toSi(amounts.before),
    held: toSi(amounts.held),
    closure: closure.slice(0, n),
    heat: closure[n],
    conserved,
    off: Number.isNaN(worst) ? Number.POSITIVE_INFINITY : worst,
  };
}

/** No start, no run. */
function nothing(
  plant: Plant,
  species: readonly string[],
  times: Float64Array,
  names: readonly string[],
  node: string,
): Transient {
  const empty = (name: string): Course => ({
    name,
    flow: plant.columns.inflow[plant.exit.get(name) ?? 0],
    flows: undefined,
    values: new Float64Array(times.length * species.length).fill(Number.NaN),
    temperatures: undefined,
  });
  return {
    species,
    times,
    start: "steady",
    outlets: plant.outlets.map((o) => empty(o.name)),
    places: names.map(empty),
    balance: undefined,
    stopped: { t: 0, why: "no steady state", node },
    steps: 0,
    fed: (_, out) => out.fill(Number.NaN),
    feedFlow: () => Number.NaN,
    look: () => ({
      at: (_, out) => out.fill(Number.NaN),
      integral: (_, out) => out.fill(Number.NaN),
      flow: () => Number.NaN,
      volume: () => Number.NaN,
      left: (_, out) => out.fill(Number.NaN),
      stretch: () => Number.POSITIVE_INFINITY,
    }),
  };
}
