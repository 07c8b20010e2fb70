import { Part, type Plant } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import { isClosed } from "../model/network.js";
import type { Injection, Trial } from "../model/trial.js";
import { SteadyEquations } from "../transfer/steady-equations.js";
import { isLevel } from "../units/basis.js";
import { addCurves, type Curves } from "./moved-curves.js";
import { type Around, MovedSystem, type Probe } from "./moved-system.js";
import { driveOf } from "./puts.js";
import { unroll } from "./unroll.js";

/** A direction in which a plant and a trial move, per unit of t. */
export interface Move {
  /** Undefined where the plant stays. */
  readonly plant?: PlantSlope;
  /** Of one injection: SI of its amount, or of its level. */
  readonly dose?: { readonly injection: number; readonly slope: number };
  /** Of the sample line of one reading: s. */
  readonly line?: { readonly reading: number; readonly delay: number; readonly lag: number };
}

/** What the probes of a trial read, SI, and its derivatives by move; a move without a derivative has none. */
export interface MovedResponse {
  readonly curves: readonly Float64Array[];
  readonly slopes: readonly (readonly Float64Array[] | undefined)[];
}

/** Are there these derivatives? For plants of the exact engine, but for closed ones, and trials that start with tracer inside or do not follow the liquid. */
export const hasSlopes = (plant: Plant, trial: Trial): boolean =>
  !plant.columns.part.includes(Part.Block) &&
  !isClosed(plant) &&
  trial.contents === undefined &&
  trial.tracer === undefined &&
  trial.flowLogs === undefined &&
  trial.readings.every((r) => r.places.length === 1);

/**
 * `trialResponse` with exact derivatives: those of the compiled balances are integrated beside them, and what a tube delays
 * moves as its delay does. No differences are taken.
 * @param plant  of cells, delays and joints
 */
export function trialSlopes(
  plant: Plant,
  trial: Trial,
  wanted: readonly { readonly time: Float64Array }[],
  moves: readonly Move[],
): MovedResponse {
  const zeros = (): Float64Array[] => wanted.map(({ time }) => new Float64Array(time.length));
  const curves = zeros();
  const slopes: (Float64Array[] | undefined)[] = moves.map(zeros);
  const last = wanted.reduce((m, { time }) => Math.max(m, time[time.length - 1] ?? 0), 0);
  const probes = trial.readings.map(
    (reading): Probe => ({
      node: nodeOf(plant.exit, reading.at),
      delay: reading.line.delay?.of(plant.env) ?? 0,
      lag: reading.line.lag?.of(plant.env) ?? 0,
    }),
  );
  trial.injections.forEach((injection, i) => {
    const entry = nodeOf(plant.entry, injection.at);
    const unrolled = unroll(plant, entry, last - injection.start);
    const { drive, before } = driveOf(plant, injection);
    const of = moves.flatMap((move, p) => {
      const around = aroundOf(plant, injection, i, move, probes.length);
      const moved = move.plant && unrolled.slope(move.plant);
      if (slopes[p] && around && (moved || !move.plant)) return [{ p, around, moved }];
      slopes[p] = undefined;
      return [];
    });
    const system = new MovedSystem(
      unrolled,
      of.map((o) => o.moved),
      probes,
      of.map((o) => o.around),
    );
    const into: Curves = { value: curves, slopes: of.map(({ p }) => slopes[p] as Float64Array[]) };
    if (before !== 0)
      addBalance(
        plant,
        injection,
        before,
        entry,
        probes,
        of.map(({ p }) => moves[p]),
        into,
      );
    addCurves(
      system,
      drive,
      wanted.map(({ time }) => time.map((t) => t - injection.start)),
      into,
    );
  });
  return { curves, slopes };
}

function nodeOf(places: ReadonlyMap<string, number>, name: string): number {
  const node = places.get(name);
  if (node === undefined) throw new RangeError(`no place '${name}' in the network`);
  return node;
}

/** What a move does to the rate of an injection and to the sample lines; undefined where the rate has no relative change. */
function aroundOf(plant: Plant, injection: Injection, i: number, move: Move, probes: number): Around | undefined {
  const { form } = injection;
  const entry = nodeOf(plant.entry, injection.at);
  let rate = 0;
  if (form.is === "signal" || (form.is === "step" && isLevel(form.level.dimension, plant.network.basis)))
    rate = move.plant ? move.plant.inflow[entry] / plant.nodes[entry].inflow : 0;
  if (move.dose?.injection === i && form.is !== "signal") {
    const from = form.is === "step" ? (form.from?.of(plant.env) ?? 0) : 0;
    const size = form.is === "pulse" ? form.amount.of(plant.env) : form.level.of(plant.env) - from;
    if (size === 0) return undefined;
    rate += move.dose.slope / size;
  }
  const line = (of: "delay" | "lag"): number[] =>
    Array.from({ length: probes }, (_, r) => (move.line?.reading === r ? move.line[of] : 0));
  return { rate, delay: line("delay"), lag: line("lag") };
}

/** The vessel in balance with a rate from before: what every probe reads of it, for ever. */
function addBalance(
  plant: Plant,
  injection: Injection,
  before: number,
  entry: number,
  probes: readonly Probe[],
  moves: readonly Move[],
  into: Curves,
): void {
  const equations = new SteadyEquations(plant);
  const { from, to, flow } = plant;
  const { inflow, size } = plant.columns;
  const c = new Float64Array(size);
  c[entry] = before / inflow[entry];
  equations.solve(c);
  probes.forEach(({ node }, r) => {
    for (let k = 0; k < into.value[r].length; k++) into.value[r][k] += c[node];
  });
  moves.forEach(({ plant: moved }, p) => {
    if (!moved) return;
    const d = new Float64Array(size);
    // A level comes with the flow that it enters in, a dosing rate is thinned by it.
    const form = injection.form;
    const follows = form.is === "step" && isLevel(form.level.dimension, plant.network.basis);
    if (!follows) d[entry] = (-before * moved.inflow[entry]) / inflow[entry] ** 2;
    for (let k = 0; k < flow.length; k++) {
      const total = inflow[to[k]];
      if (total > 0) d[to[k]] += ((moved.flow[k] - (flow[k] / total) * moved.inflow[to[k]]) / total) * c[from[k]];
    }
    equations.solve(d);
    probes.forEach(({ node }, r) => {
      for (let k = 0; k < into.slopes[p][r].length; k++) into.slopes[p][r][k] += d[node];
    });
  });
}
