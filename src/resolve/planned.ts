import type { Trial } from "../model/trial.js";
import type { Basis } from "../units/basis.js";
import { knownUnit } from "./trial-table.js";

/** A trial with its planned readings (no file, no calibration) in the unit that the vessel's basis makes of the dose: g/kg by mass. */
export function plannedIn(trial: Trial, basis: Basis): Trial {
  if (basis === "volume") return trial;
  const readings = trial.readings.map((r) => {
    const unit = r.series || r.calibration ? undefined : knownUnit(r.unit.name.replace(/\/L$/, "/kg"));
    return unit ? { ...r, unit } : r;
  });
  return { ...trial, readings };
}
