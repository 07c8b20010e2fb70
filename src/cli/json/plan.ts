import type { ExpectedParameter } from "../../plan/expected.js";
import type { Plan, PlannedReading } from "../../plan/result.js";
import type { TellsApart } from "../../plan/tell-apart.js";
import { inUnit, type Unit } from "../../units/unit.js";
import { finite, pure, quantity, series } from "./quantity.js";

/** A planned test. Times count from the injection; baseline samples are at negative ones. */
export function planJson(plan: Plan, time: Unit): Record<string, unknown> {
  const { dose, recommended, meanTime, stopWithin } = plan;
  return {
    amount: dose ? { ...quantity(dose.value, dose.unit), is: dose.is } : null,
    recommendedAmount:
      dose && recommended ? { ...quantity(recommended.value, dose.unit), because: recommended.because } : null,
    stop: quantity(plan.stop, time),
    stopWithinBounds: stopWithin === undefined ? null : quantity(stopWithin, time),
    meanTime: meanTime === undefined ? null : quantity(meanTime, time),
    readings: plan.readings.map((r) => readingJson(r, time)),
    parameters: parametersJson(plan.parameters),
    parametersWithRecommended: plan.withRecommended ? parametersJson(plan.withRecommended) : null,
    truncation: plan.truncation.map(({ stop, area, mean, variance }) => ({
      stop: quantity(stop, time),
      area: finite(area),
      mean: finite(mean),
      variance: finite(variance),
    })),
    alarms: plan.alarms,
    cautions: plan.cautions,
  };
}

function readingJson(r: PlannedReading, time: Unit): object {
  return {
    at: r.at,
    time: series(r.times, time),
    expected: series(r.expected, r.unit),
    noise: { ...series(r.sd, r.unit), assumed: r.noise.assumed },
    band: r.band ? { low: series(r.band.low, r.unit), high: series(r.band.high, r.unit) } : null,
    peak: quantity(r.peak, r.unit),
    last: quantity(r.end, r.unit),
    t10: r.t10
      ? {
          ...quantity(r.t10.value, time),
          expectedStandardError: finite(r.t10.sd / time.factor),
          spacing: quantity(r.t10.spacing, time),
        }
      : null,
    bestTimes: r.best ? { ...series(r.best.times, time), efficiency: pure(r.best.efficiency).value } : null,
  };
}

const parametersJson = (parameters: readonly ExpectedParameter[]): object =>
  Object.fromEntries(
    parameters.map((p) => [
      p.name,
      {
        ...quantity(p.value, p.unit),
        expectedStandardError: p.sd === undefined ? null : finite(p.sd / p.unit.factor),
        interval95: p.interval ? p.interval.map((v) => finite(inUnit(v, p.unit))) : null,
        told: !p.untold,
      },
    ]),
  );

/** How well one test would tell the network from a rival. */
export const apartJson = ({ says, sort, difference, chance, at, time }: TellsApart, unit: Unit): object => ({
  test: says,
  sort,
  difference,
  chance,
  most: { at, time: quantity(time, unit) },
});
