import type { Injection, Reading, Trial } from "../model/trial.js";
import { type Dimension, dimensions, times } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import { type Baseline, baselineAt, baselineOf } from "./baseline.js";
import { type Measures, measure } from "./measure.js";
import { type Noise, noiseOf } from "./noise.js";

/** What one step of cleaning did: the figures of the curve after it, trapezoid on its points, nothing extrapolated. SI. */
export interface CleanStep extends Measures {
  readonly name: string;
  /** True where t10 was shifted by a lag only, which blurs it besides. */
  readonly approximate?: boolean;
  /** The unit of the value at this step: the detector's until the calibration. */
  readonly unit: Unit;
}

/** A reading as a curve since the injection. */
export interface CleanCurve {
  readonly at: string;
  /** s since the middle of the injection (its start for a step), the line's delay taken off. */
  readonly time: Float64Array;
  /** Concentration, SI, baseline taken off. */
  readonly value: Float64Array;
  readonly unit: Unit;
  readonly timeUnit: Unit;
  /** When the injection began on this clock: 0, or half its length before. */
  readonly start: number;
  /** Points before `start`: they are baseline, not curve. */
  readonly before: number;
  readonly noise: Noise;
  readonly baseline: Baseline | undefined;
  /** What the detector's lag and a long injection add to mean, variance and third central moment: to be subtracted. */
  readonly added: { readonly mean: number; readonly variance: number; readonly third: number };
  readonly steps: readonly CleanStep[];
}

/**
 * Cleans a reading as declared, in this order: raw, calibration, leave-out, time zero, line delay, baseline. The line's
 * lag and the length of a pulse do not change the curve: what they add to its moments is returned beside it (a
 * rectangular pulse of width w adds w^2/12 to the variance about its middle; a first-order lag its own moments).
 * @returns undefined for a reading without data
 */
export function cleanReading(trial: Trial, reading: Reading): CleanCurve | undefined {
  const series = reading.series;
  const injection = trial.injections[0];
  if (!series || !injection) return undefined;
  const isStep = injection.form.is === "step";
  const steps: CleanStep[] = [];
  const clockStart = injection.start;
  const width = injection.form.is === "pulse" ? injection.lasting : 0;
  let t = series.time;
  let y = series.value;
  let unit = series.valueUnit;
  let zero = 0;
  const note = (name: string): void => {
    steps.push({ name, unit, ...measure(t, y, clockStart - zero, isStep) });
  };
  note("raw");

  if (reading.calibration) {
    const { blank, rise, per, perUnit } = reading.calibration;
    y = y.map((raw) => ((raw - blank) / rise) * per);
    unit = perUnit;
    note("calibration");
  }
  const kept = keptPoints(t, reading.leaveOut, isStep ? endOf(injection) : Number.POSITIVE_INFINITY);
  if (kept.length < t.length) {
    const [time, value] = [t, y];
    t = Float64Array.from(kept, (i) => time[i]);
    y = Float64Array.from(kept, (i) => value[i]);
    note("leave-out");
  }
  const delay = reading.line.delay?.of([]) ?? 0;
  const lag = reading.line.lag?.of([]) ?? 0;
  const shift = (name: string, by: number): void => {
    if (by === 0) return;
    t = t.map((s) => s - by);
    zero += by;
    note(name);
  };
  shift("time zero", clockStart + width / 2);
  shift("line delay", delay);

  const start = -width / 2;
  const before = t.findIndex((s) => s >= start);
  const count = before < 0 ? t.length : before;
  const noise = noiseOf(t, y, count, reading.noise);
  const typical = noise.sd[0] ?? 0;
  const baseline =
    reading.baseline === "none" ? undefined : baselineOf(t, y, count, typical, reading.baseline, !isStep);
  if (baseline) {
    const under = baseline;
    y = y.map((c, i) => c - baselineAt(under, t[i]));
    note("baseline");
  }
  takeOff(steps, "injection width", 0, width ** 2 / 12);
  takeOff(steps, "detector lag", lag, lag ** 2);
  return {
    at: reading.at,
    time: t,
    value: y,
    unit,
    timeUnit: series.timeUnit,
    start,
    before: count,
    noise,
    baseline,
    added: { mean: lag, variance: lag ** 2 + width ** 2 / 12, third: 2 * lag ** 3 },
    steps,
  };
}

/** A step of cleaning that leaves the curve as it is and is taken off its moments. */
export function takeOff(steps: CleanStep[], name: string, mean: number, variance: number): void {
  if (mean === 0 && variance === 0) return;
  const last = steps[steps.length - 1];
  const less = (x: number | undefined, by: number): number | undefined => (x === undefined ? undefined : x - by);
  steps.push({
    ...last,
    name,
    mean: less(last.mean, mean),
    variance: less(last.variance, variance),
    t10: less(last.t10, mean),
    ...(mean === 0 ? {} : { approximate: true }),
  });
}

/** A step that is taken back ends the record: what follows is another step. */
const endOf = ({ start, lasting }: Injection): number => (lasting > 0 ? start + lasting : Number.POSITIVE_INFINITY);

function keptPoints(t: Float64Array, leaveOut: Reading["leaveOut"], end: number): number[] {
  const kept: number[] = [];
  for (let i = 0; i < t.length; i++) {
    if (t[i] <= end && !leaveOut.some(({ from, to }) => t[i] >= from && t[i] <= to)) kept.push(i);
  }
  return kept;
}

/** A unit raised or multiplied, under a name of its own: min^2, (g/L)·min. */
export const productUnit = (name: string, ...units: readonly Unit[]): Unit => ({
  name,
  factor: units.reduce((f, u) => f * u.factor, 1),
  offset: 0,
  dimension: units.reduce<Dimension>((d, u) => times(d, u.dimension), dimensions.ratio),
});
