import { requireCarried } from "../compile/carried.js";
import type { Plant } from "../compile/plant.js";
import type { Injection, Trial } from "../model/trial.js";
import { RefusedError } from "../problems/refused.js";
import { problem } from "../problems/report.js";
import { isLevel } from "../units/basis.js";
import { partsOf } from "./entry.js";
import type { Drive } from "./linear-system.js";
import { courseOf, requireVarying } from "./logged-flows.js";
import { integrate, ode } from "./ode.js";
import type { Put } from "./puts.js";
import { type AnyEngine, trace } from "./trace.js";
import type { Tracing } from "./tracing.js";

/**
 * Follows what a trial puts in: with the flows of its logs where it has any, else at the plant's own.
 * @param horizon s after the put's start
 * @throws RefusedError where the engine does not carry the plant, or flows vary and the engine, or the plant, cannot bear it
 */
export function trialTracing(plant: Plant, trial: Trial, put: Put, horizon: number, engine?: AnyEngine): Tracing {
  const logs = trial.flowLogs;
  if (!logs || logs.size === 0) return trace(plant, put.entry, horizon, engine);
  const [feed] = logs.keys();
  if (engine && engine !== ode) {
    const at = trial.flows.get(feed)?.at ?? trial.at;
    throw new RefusedError([problem("flows-vary", at, { engine: engine.name, feed })]);
  }
  requireCarried(plant, "ode");
  requireVarying(plant, trial);
  const course = courseOf(plant, logs, put.start);
  const asConcentration = trial.injections.some((i) => i.start === put.start && isConcentration(plant, i, put));
  return integrate(plant, course, horizon, (drive) => ({
    entry: partsOf(put.entry),
    drive: asConcentration ? perFlow(drive, plant.columns.inflow[put.entry as number]) : drive,
    asConcentration,
  }));
}

/** Does an injection set what concentration enters, whatever the flow? */
const isConcentration = (plant: Plant, { at, form }: Injection, put: Put): boolean =>
  plant.entry.get(at) === put.entry &&
  (form.is === "signal" || (form.is === "step" && isLevel(form.level.dimension))) &&
  put.drive.amount === 0;

/** A rate at a flow as the concentration that it is. */
const perFlow = (drive: Drive, flow: number): Drive => ({
  ...drive,
  level: drive.level.map((w) => w / flow),
  slope: drive.slope.map((w) => w / flow),
});
