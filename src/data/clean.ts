import type { Injection, Reading, Trial } from "../model/trial.js";
import { type Dimension, dimensions, times } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import { type Baseline, baselineAt, baselineOf } from "./baseline.js";
import { type Censored, uncensor } from "./censored.js";
import { type Measures, measure } from "./measure.js";
import { type Noise, noiseOf } from "./noise.js";
import { inflation } from "./persistence.js";

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
  /** Change of each point for one standard deviation of each thing that calibration and limits leave open. SI. */
  readonly doubts: readonly Float64Array[];
  readonly censored: Censored | undefined;
  /** What the detector's lag and a long injection add to mean, variance and third central moment: to be subtracted. */
  readonly added: { readonly mean: number; readonly variance: number; readonly third: number };
  readonly steps: readonly CleanStep[];
}

/**
 * Cleans a reading as declared, in this order: raw, dead time, temperature, calibration, leave-out, limits, time zero,
 * line delay, baseline, decay. The line's
 * lag and the length of a pulse do not change the curve: what they add to its moments is returned beside it (a
 * rectangular pulse of width w adds w^2/12 to the variance about its middle; a first-order lag its own moments).
 * @param judged noise of the same log, where it is known already
 * @returns undefined for a reading without data
 */
export function cleanReading(trial: Trial, reading: Reading, judged?: Noise): CleanCurve | undefined {
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

  for (const stage of reading.stages) {
    y = stage.value;
    unit = stage.unit;
    note(stage.name);
  }
  let doubts = reading.doubts;
  let flags = reading.censored;
  const keep = (kept: readonly number[]): void => {
    const [time, value] = [t, y];
    t = Float64Array.from(kept, (i) => time[i]);
    y = Float64Array.from(kept, (i) => value[i]);
    doubts = doubts.map((d) => Float64Array.from(kept, (i) => d[i]));
    flags = flags && Int8Array.from(kept, (i) => (flags as Int8Array)[i]);
  };
  const kept = keptPoints(t, reading.leaveOut, isStep ? endOf(injection) : Number.POSITIVE_INFINITY);
  if (kept.length < t.length) {
    keep(kept);
    note("leave-out");
  }
  let censored: Censored | undefined;
  if (flags?.some((f) => f !== 0)) {
    const { doubt, value, ...rest } = uncensor(y, flags, reading.limits, !isStep);
    censored = rest.censored;
    keep(rest.kept);
    y = value;
    doubts = [...doubts, doubt];
    note("limits");
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
  let noise = noiseOf(t, y, count, reading, isStep, judged);
  const typical = (noise.sd[0] ?? 0) * Math.sqrt(inflation(noise.persistence.lag1));
  const { decay = 0, loss = 0 } = trial.tracer ?? {};
  const lost = decay > 0 || (loss > 0 && !isStep);
  const baseline =
    reading.baseline === "none" ? undefined : baselineOf(t, y, count, typical, reading.baseline, !isStep && !lost);
  if (baseline) {
    const under = baseline;
    y = y.map((c, i) => c - baselineAt(under, t[i]));
    note("baseline");
  }
  if (lost) {
    // Decay goes on in the sample line, a loss inside the vessel does not.
    const back = t.map((s) =>
      Math.exp(decay * Math.max(0, s + width / 2 + delay) + (isStep ? 0 : loss) * Math.max(0, s + width / 2)),
    );
    y = y.map((c, i) => c * back[i]);
    noise = { ...noise, sd: noise.sd.map((sd, i) => sd * back[i]) };
    doubts = doubts.map((d) => d.map((x, i) => x * back[i]));
    note(decay > 0 ? (loss > 0 && !isStep ? "decay and loss" : "decay") : "loss");
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
    doubts,
    censored,
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
