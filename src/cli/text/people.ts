import type { Reported } from "../../model/duty.js";
import type { Unit } from "../../units/unit.js";

/** The unit in which people read a figure: % for conversion, yield and selectivity. */
export const peopleUnit = (what: Reported["what"], unit: Unit | undefined): Unit | undefined =>
  unit && ["conversion", "yield", "selectivity"].includes(what) ? { ...unit, name: "%", factor: 0.01 } : unit;
