import type { Balance } from "../../simulate/respond.js";
import type { TracerReading, TracerResult } from "../../simulate/tracer.js";
import type { Unit } from "../../units/unit.js";
import type { Clock } from "../times.js";
import { pureNumber, squared } from "../units.js";
import { finite, quantity, series } from "./quantity.js";

/**
 * What `simulate --pulse` and `--step` found.
 * @param areaUnit of `cumulative` and spikes: a pure number but in a closed vessel
 */
export function tracerJson(
  result: TracerResult,
  clock: Clock,
  valueUnit: Unit,
  areaUnit: Unit,
  amount: Unit,
): Record<string, unknown> {
  const { unit } = clock;
  const area = (si: number) => (areaUnit === pureNumber ? si : quantity(si, areaUnit));
  return {
    engine: result.engine,
    readings: result.readings.map((r) => ({
      at: r.at,
      time: { unit: unit.name, values: clock.shown },
      value: series(r.value, valueUnit),
      cumulative: series(r.cumulative, areaUnit),
      spikes: r.spikes.map((s) => ({ time: quantity(s.time, unit), area: area(s.area) })),
      spikesLeftOut: area(r.spikesLeftOut),
    })),
    // In a closed vessel, where areas are times, there are none.
    moments: areaUnit === pureNumber ? result.readings.map((r) => momentsJson(r, unit)) : [],
    balance: balanceJson(result.balance, amount),
  };
}

/** Moments of residence time at one place. */
export function momentsJson({ at, area, moments }: Pick<TracerReading, "at" | "area" | "moments">, unit: Unit): object {
  const { share, mean, variance, skewness } = moments;
  return {
    at,
    area,
    share,
    mean: quantity(mean, unit),
    variance: quantity(variance, squared(unit)),
    ...(skewness === undefined ? { skewness: null, why: "undefined" } : { skewness: finite(skewness) }),
  };
}

/** Where all tracer is at the end of the run. */
export const balanceJson = ({ injected, left, inside, recovered, closure }: Balance, unit: Unit): object => {
  const of = (amount: number) => quantity(amount, unit);
  return { injected: of(injected), left: of(left), inside: of(inside), recovered: of(recovered), closure };
};
