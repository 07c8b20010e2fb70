import { uncarried } from "../compile/carried.js";
import { Part, type Plant } from "../compile/plant.js";
import { isClosed } from "../model/network.js";
import type { Problem } from "../problems/problem.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import { isCellsOnly } from "./cell-system.js";
import { chebyshev } from "./chebyshev.js";
import type { Entry } from "./entry.js";
import { exact } from "./exact.js";
import { krylov } from "./krylov.js";
import { laplace } from "./laplace.js";
import type { TracerEngine } from "./linear-system.js";
import { ode } from "./ode.js";
import type { TracerWay, Tracing, WatchTracing } from "./tracing.js";
import { unrolledTracing } from "./unrolled-tracing.js";

/** An engine of either sort: one that integrates what is left when tubes are unrolled, or one with a way of its own. */
export type AnyEngine = TracerEngine | TracerWay;

/** Passes through tubes of a closed vessel that the exact engine follows one by one; beyond, laplace takes them together. */
const fewPasses = 60;

/** More nodes than these, and the ways for large networks take over. */
const small = 400;
/** Where the fastest cell is so much faster than the mean one, and empties so often in all, solves cost less than products. */
const farApart = 50;
const manyTurns = 30_000;

/**
 * The exact engine for cells, tubes and junctions alone, one for large networks where there are many; laplace for plants with other bodies, and where tracer goes round
 * and round a closed vessel; integration where it comes back by tubes very often.
 * @param horizon s; nothing later is asked
 */
export function engineFor(plant: Plant, horizon = 0): AnyEngine {
  const { part } = plant.columns;
  if (part.includes(Part.Block)) return manyWaysRound(plant) ? ode : laplace;
  if (isClosed(plant) && passesIn(plant, horizon) > fewPasses) return laplace;
  if (!isClosed(plant) && manyCopies(plant, horizon)) return ode;
  return isLarge(plant) ? largeEngine(plant, horizon) : exact;
}

/** Delays in circles from here on make more different passes than laplace can take apart in good time. */
const manyDelays = 3;

/** Do several delays lie in circles, where integration bears all bodies? */
function manyWaysRound(plant: Plant): boolean {
  if (isClosed(plant)) return false;
  const round = plant.groups.filter((group) => group.length > 1).flatMap((group) => [...group]);
  const late = round.filter((i) => {
    const { part, inflow, volume, block } = plant.nodes[i];
    return inflow > 0 && volume > 0 && (part === Part.Delay || (block?.delay(inflow) ?? 0) > 0);
  });
  return late.length >= manyDelays && uncarried(plant, "ode").length === 0;
}

/** For many cells: one series where their rates lie near each other, a space of solves where they are far apart. */
function largeEngine({ columns, feeds, volume }: Plant, horizon: number): AnyEngine {
  let [fastest, through] = [0, 0];
  for (let i = 0; i < columns.size; i++) {
    if (columns.part[i] !== Part.Cell) continue;
    fastest = Math.max(fastest, columns.inflow[i] / columns.volume[i]);
    through += columns.inflow[i];
  }
  const fed = feeds.reduce((sum, f) => sum + f.flow, 0);
  const span = horizon > 0 ? horizon : fed > 0 ? (3 * volume.active) / fed : 0;
  return fastest * volume.active > farApart * through && fastest * span > manyTurns ? krylov : chebyshev;
}

/** Passes through tubes beyond which cells behind them are too many copies for the exact engine. */
const mostFollowed = 400;
/** Mean passes through a tube to what is followed of it: until a pass carries 1e-12. */
const untilNothing = 28;

/**
 * Does tracer come back to cells by tubes so often that the exact engine would go on for minutes? Told from how often the mean of
 * what is fed passes a tube.
 */
function manyCopies(plant: Plant, horizon: number): boolean {
  const { size, part, volume, inflow } = plant.columns;
  if (!plant.structure.tubeInLoop || !part.includes(Part.Cell)) return false;
  const fed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  for (let i = 0; i < size; i++) {
    if (part[i] !== Part.Delay || !(volume[i] > 0)) continue;
    const passes = untilNothing * (inflow[i] / fed);
    if (Math.min(horizon > 0 ? (horizon * inflow[i]) / volume[i] : Number.POSITIVE_INFINITY, passes) > mostFollowed)
      return true;
  }
  return false;
}

/** How often tracer may pass the shortest tube. */
function passesIn({ columns: { size, part, volume, inflow } }: Plant, horizon: number): number {
  let most = 0;
  for (let i = 0; i < size; i++) if (part[i] === Part.Delay) most = Math.max(most, (horizon * inflow[i]) / volume[i]);
  return most;
}

const isLarge = (plant: Plant): boolean => plant.columns.size > small && isCellsOnly(plant);

/** Why no engine follows tracer through a plant: too many nodes. */
export const untraceable = (plant: Plant): Problem[] =>
  isLarge(plant) ? [] : uncarried(plant, engineFor(plant) === laplace ? "laplace" : "tracer");

/**
 * Follows tracer through a plant with an engine.
 * @throws RefusedError where the engine does not carry the plant, or tracer goes round a closed vessel too often
 */
export function trace(
  plant: Plant,
  entry: Entry,
  horizon: number,
  engine: AnyEngine = engineFor(plant, horizon),
  watch?: WatchTracing,
): Tracing {
  const tracing =
    "trace" in engine ? engine.trace(plant, entry, horizon, watch) : unrolledTracing(plant, entry, horizon, engine);
  // Elsewhere a pass that is given up carries next to nothing; in a closed vessel it carries what the first did.
  if (isClosed(plant) && tracing.truncated) throw new RefusedError([problem("too-many-passes", plant.network.at, {})]);
  return tracing;
}
