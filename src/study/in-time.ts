import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import { changes } from "../transient/course-line.js";
import { worthSeeing } from "../transient/in-time.js";
import { type Transient, transient } from "../transient/transient.js";

/** A duty that goes on in time, in the vessel as fitted. */
export interface InTime {
  readonly plant: Plant;
  readonly run: Transient;
}

/** Fine: what happens after the last change is often over long before all is washed out. */
const points = 961;

/** A duty in time, for a picture; undefined where nothing of it changes. */
export function overTime(plant: Plant, duty: Duty): InTime | undefined {
  if (!changes(duty) && duty.contents === undefined) return undefined;
  const end = worthSeeing(plant, duty);
  if (!(end > 0) || !Number.isFinite(end)) return undefined;
  const times = Float64Array.from({ length: points }, (_, k) => (end * k) / (points - 1));
  return { plant, run: transient(plant, duty.chemistry, duty, times, { at: [], balance: false }) };
}
