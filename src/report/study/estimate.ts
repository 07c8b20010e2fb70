import type { FittedParameter } from "../../fit/result.js";
import type { Duty } from "../../model/duty.js";
import { parseUnit } from "../../units/parse.js";
import { differenceInUnit, inUnit, type Unit } from "../../units/unit.js";
import type { Estimate } from "../input.js";

/** A number and its interval (SI) as people read it. */
export function estimate(
  value: number | undefined,
  interval: readonly [number, number] | undefined,
  unit: Unit,
): Estimate {
  const shown = (x: number) => inUnit(x, unit);
  return {
    value: value === undefined || Number.isNaN(value) ? undefined : shown(value),
    unit: unit.name,
    ...(interval ? { low: shown(interval[0]), high: shown(interval[1]) } : {}),
  };
}

/** The same for a difference of two values; one of percentages is in percentage points. */
export function differenceEstimate(
  value: number,
  interval: readonly [number, number] | undefined,
  unit: Unit,
): Estimate {
  const shown = (x: number) => differenceInUnit(x, unit);
  return {
    value: shown(value),
    unit: unit.name === "%" ? "percentage points" : unit.name,
    ...(interval ? { low: shown(interval[0]), high: shown(interval[1]) } : {}),
  };
}

/** A parameter without an interval is one that the data cannot tell. */
export const parameterEstimate = (p: FittedParameter): Estimate =>
  estimate(p.value, p.interval95 ?? [Number.NaN, Number.NaN], p.unit);

/** As people read shares. */
export const percent = ((): Unit => {
  const unit = parseUnit("%");
  if (!("factor" in unit)) throw new Error("no unit %");
  return unit;
})();

/** The unit in which people read a report line: % for conversion, yield and selectivity, else the file's own. */
export function readingUnit(duty: Duty, name: string, unit: Unit): Unit {
  const what = duty.report.find((r) => r.text === name)?.what;
  return what === "conversion" || what === "yield" || what === "selectivity" ? percent : unit;
}
