import type { CleanStep } from "../../data/clean.js";
import { productUnit } from "../../data/clean.js";
import type { MomentsResult, ReadingMoments } from "../../data/moments.js";
import type { Unit } from "../../units/unit.js";
import { perUnit, squared } from "../units.js";
import { figureJson } from "./figure.js";
import { finite, quantity, series } from "./quantity.js";

/** What `moments` found. */
export function momentsResultJson({ readings, grade, findings, notSupported }: MomentsResult): Record<string, unknown> {
  return { readings: readings.map(readingJson), grade, findings, notSupported };
}

function readingJson(r: ReadingMoments): object {
  const time = r.timeUnit;
  return {
    at: r.at,
    area: figureJson(r.area),
    recovery: figureJson(r.recovery),
    ...(r.expected === undefined ? {} : { expectedRecovery: r.expected }),
    mean: figureJson(r.mean),
    variance: figureJson(r.variance),
    skewness: figureJson(r.skewness),
    t10: figureJson(r.t10),
    t16: figureJson(r.t16),
    t50: figureJson(r.t50),
    t84: figureJson(r.t84),
    t90: figureJson(r.t90),
    percentilesApproximate: r.percentilesShifted,
    indices: {
      ...notEstimable,
      ...Object.fromEntries(Object.entries(r.indices).map(([name, f]) => [camel(name), figureJson(f)])),
    },
    tail: tailJson(r),
    noise: { ...r.noise, sd: figureJson(r.noise.sd) },
    steps: r.steps.map((s) => stepJson(s, time)),
    curve: r.curve
      ? {
          time: series(r.curve.time, time),
          E: series(r.curve.E, perUnit(time)),
          F: series(r.curve.F, one),
          W: series(
            r.curve.F.map((f) => 1 - f),
            one,
          ),
          standardErrorF: series(r.curve.error, one),
          internalAge: r.curve.I ? series(r.curve.I, perUnit(time)) : null,
          intensity: series(r.curve.L, perUnit(time)),
        }
      : null,
  };
}

/** Indices that stand there always; those that no volume or flow is known for have no value. */
const notEstimable = Object.fromEntries(
  ["morrill", "holdback", "segregation", "tanks", "peclet"].map((name) => [
    name,
    { value: null, unit: "1", why: "not-estimable" },
  ]),
);

const one: Unit = { name: "", factor: 1, offset: 0, dimension: [0, 0, 0, 0, 0, 0, 0] };

function tailJson({ tail, tailShare, timeUnit, unit }: ReadingMoments): object {
  const share = { area: finite(tailShare.area), mean: finite(tailShare.mean), variance: finite(tailShare.variance) };
  if (tail.is !== "exponential") return { is: tail.is, share };
  return {
    is: tail.is,
    from: quantity(tail.from, timeUnit),
    end: quantity(tail.end, timeUnit),
    level: quantity(tail.level, unit),
    rate: quantity(tail.rate, perUnit(timeUnit)),
    points: tail.points,
    share,
  };
}

function stepJson({ name, unit, area, mean, variance, t10, approximate }: CleanStep, time: Unit): object {
  return {
    name,
    area: quantity(area, productUnit(`${unit.name} ${time.name}`, unit, time)),
    mean: quantity(mean, time),
    variance: quantity(variance, squared(time)),
    t10: quantity(t10, time),
    ...(approximate ? { approximate: true } : {}),
  };
}

const camel = (name: string): string => name.replace(/-(\w)/g, (_, letter: string) => letter.toUpperCase());
