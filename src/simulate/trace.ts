import { uncarried } from "../compile/carried.js";
import { Part, type Plant } from "../compile/plant.js";
import type { Problem } from "../problems/problem.js";
import { exact } from "./exact.js";
import { laplace } from "./laplace.js";
import type { TracerEngine } from "./linear-system.js";
import { balanceAt, see } from "./respond.js";
import type { TracerWay, Tracing } from "./tracing.js";
import { unroll } from "./unroll.js";

/** An engine of either sort: one that integrates what is left when tubes are unrolled, or one with a way of its own. */
export type AnyEngine = TracerEngine | TracerWay;

/** The exact engine for cells, tubes and junctions alone, laplace for plants with other bodies. */
export const engineFor = (plant: Plant): AnyEngine => (plant.columns.part.includes(Part.Block) ? laplace : exact);

/** Why no engine follows tracer through a plant: too many nodes. */
export const untraceable = (plant: Plant): Problem[] =>
  uncarried(plant, engineFor(plant) === laplace ? "laplace" : "tracer");

/**
 * Follows tracer through a plant with an engine.
 * @throws RefusedError where the engine does not carry the plant
 */
export function trace(plant: Plant, entry: number, horizon: number, engine: AnyEngine = engineFor(plant)): Tracing {
  return "trace" in engine ? engine.trace(plant, entry, horizon) : unrolledTracing(plant, entry, horizon, engine);
}

function unrolledTracing(plant: Plant, entry: number, horizon: number, engine: TracerEngine): Tracing {
  const unrolled = unroll(plant, entry, horizon);
  return {
    truncated: unrolled.truncated,
    passagesAt: (node) => unrolled.outflow(node),
    balance: (drive, until) => balanceAt(plant, unrolled, drive, until, engine),
    see: (drive, looks) =>
      see(
        unrolled,
        drive,
        looks.map(({ node, times, lag, integral }) => ({
          passages: unrolled.outflow(node).map((p) => (lag ? { ...p, lag } : p)),
          times,
          ...(integral === undefined ? {} : { integral }),
        })),
        engine,
      ),
  };
}
