import type { Trial } from "../model/trial.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import { formatNumber, formatQuantity } from "../units/format.js";
import type { Unit } from "../units/unit.js";
import type { ExpectedParameter } from "./expected.js";
import type { PlannedNoise } from "./noise.js";
import type { Truncated } from "./passage.js";
import type { Alarm, PlannedReading } from "./result.js";

const percent = (x: number): string => `${formatNumber(100 * x, 3)} %`;

/** Density of water rises by about this share of a dissolved salt's own concentration (common practice, NaCl near 20 degC). */
const saltDensity = 0.7;

/** A slug that much heavier than the water sinks in slow vessels (common practice). */
const heavy = 5e-4;

/** Alarms of one reading: noise, limits, tail. */
export function readingAlarms(reading: PlannedReading, noise: PlannedNoise): Alarm[] {
  const { at, unit, peak, end, limits } = reading;
  const alarms: Alarm[] = [];
  if (noise.assumed)
    alarms.push({
      code: "noise-assumed",
      message: `no noise is declared at ${at}: 1 % of the peak was taken for it`,
      next: "declare `noise: {floor: …}` from blanks or the detector's sheet: every expected interval rests on it",
    });
  else if (peak < 50 * noise.floor)
    alarms.push({
      code: "peak-low",
      message: `the peak at ${at} is ${formatNumber(peak / noise.floor, 3)} times the noise; 50 to 100 times is wanted`,
      next: "use more tracer, or a detector with less noise",
    });
  if (limits.above !== undefined && peak > limits.above)
    alarms.push({
      code: "over-limit",
      message: `the peak at ${at} would be ${formatQuantity(peak, unit, 3)}, above the limit of ${formatQuantity(limits.above, unit, 3)}`,
      next: "use less tracer, spread the injection, or dilute the sample",
    });
  const least = Math.max(limits.below ?? 0, 3 * noise.floor);
  if (reading.isPulse && end < least)
    alarms.push({
      code: "end-in-noise",
      message: `at the last sample ${at} is down to ${formatQuantity(end, unit, 3)}, below ${formatQuantity(least, unit, 3)} (${least === 3 * noise.floor ? "three times the noise" : "the limit of detection"})`,
      next: "use more tracer, or say by `limits: {below: …}` what the detector cannot see, and fit a network",
    });
  return alarms;
}

/** What a mean from a record that ends too early would be taken for. */
export function truncationAlarm({ mean, area, stop }: Truncated, time: Unit, isPulse: boolean): Alarm[] {
  if (!isPulse || mean > 0.97) return [];
  const dead = `${formatNumber(100 * (1 - mean), 2)} %`;
  return [
    {
      code: "stops-early",
      message: `a test stopped at ${formatQuantity(stop, time, 3)} has seen ${percent(area)} of the tracer; its plain mean would be read as ${dead} dead volume where none is dead`,
      next: "sample longer, or draw no dead volume from the mean: fit a network",
    },
  ];
}

/** Less than this share that passes at once is not worth an alarm. */
const worthCatching = 0.002;

/** What passes a place without any delay: samples begin too late for it. `share` of all that passes there; `lasting` of the injection, s. */
export function atOnceAlarms(at: string, share: number, isPulse: boolean, lasting: number): Alarm[] {
  if (!(share > worthCatching)) return [];
  const code = "comes-at-once";
  const passes = `${percent(share)} of the tracer that passes ${at} comes at once`;
  if (!isPulse || lasting > 0) {
    const during = isPulse ? ", while it is put in and not after" : "";
    return [{ code, message: `${passes}${during}`, next: "read fast from the first second of the injection on" }];
  }
  return [
    {
      code,
      message: `${passes}: a pulse put in at once has brought it past before a sample is taken, and it is then missing from the recovery`,
      next: "put the tracer in evenly over a known time (`lasting`), and read fast from its first second on",
    },
  ];
}

/** What the parameters' expected intervals say of the plan. */
export function parameterAlarms(
  parameters: readonly ExpectedParameter[],
  confounded: readonly (readonly string[])[],
): Alarm[] {
  const alarms = confounded.map(
    (names): Alarm => ({
      code: "cannot-tell",
      message:
        names.length === 1
          ? `this test says nothing about ${names[0]}`
          : `this test cannot tell ${names.join(" from ")}: moved together they leave every reading as it is`,
      next: "add a second flow, another stirrer speed or a reading at an inner place, or keep one of them at a known value",
    }),
  );
  const wide = parameters.filter((p) => p.untold && p.sd !== undefined).map((p) => p.name);
  if (wide.length > 0)
    alarms.push({
      code: "told-poorly",
      message: `the expected interval of ${wide.join(" and ")} fills more than half of its bounds`,
      next: "sample longer or denser where it acts (see the best times), use more tracer, or test at a second flow",
    });
  return alarms;
}

/** Injection: how long, how heavy. */
export function injectionAlarms(trial: Trial, flow: (at: string) => number | undefined, meanTime: number): Alarm[] {
  return trial.injections.flatMap(({ form, lasting, at }): Alarm[] => {
    if (form.is !== "pulse") return [];
    const alarms: Alarm[] = [];
    if (lasting > 0.05 * meanTime)
      alarms.push({
        code: "injection-long",
        message: `the injection lasts ${percent(lasting / meanTime)} of the mean time`,
        next: "log its true start and end; a fit takes its length into account, a plain reading of moments its mean and variance only",
      });
    const through = flow(at);
    if (!through || !sameDimension(form.amount.dimension, dimensions.mass)) return alarms;
    // Poured in at once it enters all the same over some time: 1 % of the mean time is brisk.
    const over = lasting > 0 ? lasting : 0.01 * meanTime;
    const heavier = (saltDensity * form.amount.of([])) / (through * over) / 1000;
    if (heavier > heavy)
      alarms.push({
        code: "slug-heavy",
        message: `as a salt the dose makes what enters at ${at} about ${percent(heavier)} heavier than water while it is put in${lasting > 0 ? "" : " (over 1 % of the mean time)"}`,
        next: "dilute it, match its temperature, inject over the whole pipe and longer: g h Δρ/ρ / u² must stay well below 1 (h depth, u velocity at the inlet)",
      });
    return alarms;
  });
}
