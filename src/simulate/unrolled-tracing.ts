import type { Plant } from "../compile/plant.js";
import type { Entry } from "./entry.js";
import { cut } from "./halts.js";
import type { TracerEngine } from "./linear-system.js";
import { balanceAt, see } from "./respond.js";
import type { Tracing } from "./tracing.js";
import { unroll } from "./unroll.js";

/** By an engine that integrates what is left when tubes are unrolled. */
export function unrolledTracing(plant: Plant, entry: Entry, horizon: number, engine: TracerEngine): Tracing {
  const unrolled = unroll(plant, entry, horizon);
  return {
    truncated: unrolled.complete < horizon,
    passagesAt: (node) => unrolled.outflow(node),
    balance: (drive, until) => balanceAt(plant, unrolled, drive, until, engine),
    see: (drive, looks) => {
      const found = see(
        unrolled,
        drive,
        looks.map(({ node, times, lag, integral }) => ({
          passages: unrolled.outflow(node).map((p) => (lag ? { ...p, lag } : p)),
          times,
          ...(integral === undefined ? {} : { integral }),
        })),
        engine,
      );
      const last = looks.reduce((t, { times }) => Math.max(t, times[times.length - 1] ?? 0), 0);
      return { ...found, stopped: found.stopped ?? cut(unrolled.complete, last) };
    },
  };
}
