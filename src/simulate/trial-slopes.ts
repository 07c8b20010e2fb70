import type { Plant } from "../compile/plant.js";
import type { PlantSlope } from "../compile/plant-slopes.js";
import { isClosed } from "../model/network.js";
import type { Injection, Trial } from "../model/trial.js";
import { isLevel } from "../units/basis.js";
import { laplace } from "./laplace.js";
import { addBalance, addByLaplace, addByUnrolling, type Moving, type PutIn } from "./moved-put.js";
import type { Around, Probe } from "./moved-system.js";
import { driveOf } from "./puts.js";
import { engineFor } from "./trace.js";

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

/** Are there these derivatives? For all plants but closed ones, and trials that start without tracer inside and follow the liquid, decay aside. */
export const hasSlopes = (plant: Plant, trial: Trial): boolean =>
  !isClosed(plant) &&
  trial.contents === undefined &&
  trial.flowLogs === undefined &&
  trial.tracer?.follows === undefined &&
  !trial.tracer?.loss &&
  !trial.tracer?.retained?.length;

/** A place that a reading draws from, and how it sees it. */
interface Drawn extends Probe {
  readonly reading: number;
  readonly share: number;
}

/**
 * `trialResponse` with exact derivatives: those of the compiled balances are integrated beside them, or of the transfer functions
 * inverted beside them, and what a tube delays moves as its delay does. No differences are taken.
 */
export function trialSlopes(
  plant: Plant,
  trial: Trial,
  wanted: readonly { readonly time: Float64Array }[],
  moves: readonly Move[],
): MovedResponse {
  const probes = trial.readings.flatMap((r, reading) => {
    const delay = r.line.delay?.of(plant.env) ?? 0;
    const lag = r.line.lag?.of(plant.env) ?? 0;
    const places = r.places.length === 1 ? [{ name: r.at, share: 1 }] : r.places;
    return places.map(({ name, share }): Drawn => ({ node: nodeOf(plant.exit, name), delay, lag, reading, share }));
  });
  const zeros = (): Float64Array[] => wanted.map(({ time }) => new Float64Array(time.length));
  const curves = zeros();
  const slopes: (Float64Array[] | undefined)[] = moves.map(zeros);
  const last = wanted.reduce((m, { time }) => Math.max(m, time[time.length - 1] ?? 0), 0);
  const decay = trial.tracer?.decay ?? 0;
  const add = engineFor(plant, last) === laplace ? addByLaplace : addByUnrolling;
  trial.injections.forEach((injection, i) => {
    const entry = nodeOf(plant.entry, injection.at);
    const { drive, before } = driveOf(plant, injection, decay);
    const clocks = probes.map(({ reading }) => wanted[reading].time.map((t) => t - injection.start));
    const own = (): Float64Array[] => clocks.map((t) => new Float64Array(t.length));
    const moving = moves.flatMap((move, p): Moving[] => {
      const around = slopes[p] && aroundOf(plant, injection, i, move, probes);
      return around ? [{ p, around, plant: move.plant, sums: own() }] : [];
    });
    const put: PutIn = { entry, horizon: last - injection.start, drive, probes, clocks, moving, sums: own() };
    const found = add(plant, put);
    for (const p of moves.keys()) if (!found.some((m) => m.p === p)) slopes[p] = undefined;
    if (before !== 0) addBalance(plant, injection, before, put, found);
    // What each place shows, by its share, and as far as it has not decayed.
    probes.forEach(({ reading, share }, r) => {
      for (let k = 0; k < clocks[r].length; k++) {
        const counts = decay === 0 ? share : share * Math.exp(-decay * clocks[r][k]);
        curves[reading][k] += counts * put.sums[r][k];
        for (const { p, sums } of found) (slopes[p] as Float64Array[])[reading][k] += counts * sums[r][k];
      }
    });
  });
  return { curves, slopes };
}

function nodeOf(places: ReadonlyMap<string, number>, name: string): number {
  const node = places.get(name);
  if (node === undefined) throw new RangeError(`no place '${name}' in the network`);
  return node;
}

/** What a move does to the rate of an injection and to the sample lines; undefined where there is no derivative. */
function aroundOf(
  plant: Plant,
  injection: Injection,
  i: number,
  move: Move,
  probes: readonly Probe[],
): Around | undefined {
  const { form } = injection;
  const entry = nodeOf(plant.entry, injection.at);
  let rate = 0;
  if (form.is === "signal" || (form.is === "step" && isLevel(form.level.dimension)))
    rate = move.plant ? move.plant.inflow[entry] / plant.nodes[entry].inflow : 0;
  if (move.dose?.injection === i && form.is !== "signal") {
    const from = form.is === "step" ? (form.from?.of(plant.env) ?? 0) : 0;
    const size = form.is === "pulse" ? form.amount.of(plant.env) : form.level.of(plant.env) - from;
    if (size === 0) return undefined;
    rate += move.dose.slope / size;
  }
  const line = (of: "delay" | "lag"): number[] => probes.map((_, r) => (move.line?.reading === r ? move.line[of] : 0));
  return { rate, delay: line("delay"), lag: line("lag") };
}
