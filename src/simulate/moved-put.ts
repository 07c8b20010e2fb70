import type { Plant } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import type { Injection } from "../model/trial.js";
import { SteadyEquations } from "../transfer/steady-equations.js";
import { isLevel } from "../units/basis.js";
import { laplaceTracing } from "./laplace.js";
import type { Drive } from "./linear-system.js";
import { addCurves } from "./moved-curves.js";
import { type Around, MovedSystem, type Probe } from "./moved-system.js";
import { unroll } from "./unroll.js";

/** One injection with the probes that see it, and the directions that are left. */
export interface PutIn {
  readonly entry: number;
  /** s after its start. */
  readonly horizon: number;
  readonly drive: Drive;
  readonly probes: readonly Probe[];
  /** By probe: s after its start. */
  readonly clocks: readonly Float64Array[];
  readonly moving: readonly Moving[];
  /** By probe, to be added to: what it sees. */
  readonly sums: readonly Float64Array[];
}

export interface Moving {
  /** Which of the moves. */
  readonly p: number;
  readonly around: Around;
  readonly plant: PlantSlope | undefined;
  /** By probe, to be added to: the derivative. */
  readonly sums: readonly Float64Array[];
}

/** Adds what the probes see and its derivatives; gives the directions that have one. */
export type Adder = (plant: Plant, put: PutIn) => Moving[];

export const addByUnrolling: Adder = (plant, { entry, horizon, drive, probes, clocks, moving, sums }) => {
  const unrolled = unroll(plant, entry, horizon);
  const of = moving.flatMap((move) => {
    const slope = move.plant && unrolled.slope(move.plant);
    return slope || !move.plant ? [{ move, slope }] : [];
  });
  const found = of.map(({ move }) => move);
  const system = new MovedSystem(
    unrolled,
    of.map(({ slope }) => slope),
    probes,
    found.map(({ around }) => around),
  );
  addCurves(system, drive, clocks, { value: sums, slopes: found.map((m) => m.sums) });
  return found;
};

export const addByLaplace: Adder = (plant, { entry, horizon, drive, probes, clocks, moving, sums }) => {
  const looks = probes.map(({ node, delay, lag }, r) => {
    return { node, lag, times: clocks[r].map((t) => t - delay), integral: false };
  });
  const along = moving.map(({ around: { delay, lag }, plant: moved }) => ({ plant: moved, delay, lag }));
  const { seen, slopes, stopped } = laplaceTracing(plant, entry, horizon).moved(drive, looks, along);
  seen.forEach(({ value }, r) => {
    for (let k = 0; k < value.length; k++) sums[r][k] += value[k];
  });
  return moving.filter(({ around: { rate }, sums: moved }, d) => {
    const own = slopes[d];
    if (!own || stopped !== undefined) return false;
    moved.forEach((sum, r) => {
      for (let k = 0; k < sum.length; k++) sum[k] += own[r][k] + rate * seen[r].value[k];
    });
    return true;
  });
};

/** The vessel in balance with a rate from before: what every probe reads of it, for ever. */
export function addBalance(
  plant: Plant,
  injection: Injection,
  before: number,
  { entry, probes, sums }: PutIn,
  moving: readonly Moving[],
): void {
  const equations = new SteadyEquations(plant);
  const { from, to, flow } = plant;
  const { inflow, size } = plant.columns;
  const c = new Float64Array(size);
  c[entry] = before / inflow[entry];
  equations.solve(c);
  probes.forEach(({ node }, r) => {
    for (let k = 0; k < sums[r].length; k++) sums[r][k] += c[node];
  });
  moving.forEach(({ plant: moved, sums: slopes }) => {
    if (!moved) return;
    const d = new Float64Array(size);
    // A level comes with the flow that it enters in, a dosing rate is thinned by it.
    const form = injection.form;
    const follows = form.is === "step" && isLevel(form.level.dimension);
    if (!follows) d[entry] = (-before * moved.inflow[entry]) / inflow[entry] ** 2;
    for (let k = 0; k < flow.length; k++) {
      const total = inflow[to[k]];
      if (total > 0) d[to[k]] += ((moved.flow[k] - (flow[k] / total) * moved.inflow[to[k]]) / total) * c[from[k]];
    }
    equations.solve(d);
    probes.forEach(({ node }, r) => {
      for (let k = 0; k < slopes[r].length; k++) slopes[r][k] += d[node];
    });
  });
}
