import { compile } from "../compile/compile.js";
import type { Plant } from "../compile/plant.js";
import { networkModel } from "../fit/network-model.js";
import { settingsOfDay } from "../fit/settings.js";
import { isClosed, type Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { Problem } from "../problems/problem.js";
import { collector } from "../problems/report.js";
import { settlingTime } from "../simulate/tracer.js";
import { tracerPlant } from "../simulate/tracer-plant.js";
import { atOnceAlarms, injectionAlarms, parameterAlarms, readingAlarms, truncationAlarm } from "./alarms.js";
import { asStep, doseOf, withDose } from "./altered.js";
import { bandOf } from "./band.js";
import { bestTimes } from "./best-times.js";
import { cautionsOf } from "./cautions.js";
import { evenClock, sampleClock } from "./clock.js";
import { asLogged, expectedOf } from "./expected.js";
import { type PlannedNoise, plannedNoise } from "./noise.js";
import { enough, type Passage, passageOf, timeOf, truncated } from "./passage.js";
import type { Plan, PlannedReading } from "./result.js";
import { t10Error } from "./t10.js";

export interface PlanOptions {
  /** s after the injection; undefined: as long as it takes. */
  readonly until?: number | undefined;
  /** Samples after the injection, per reading. */
  readonly samples: number;
  /** s between samples, for a logger; undefined: a clock for taking samples by hand. */
  readonly every?: number | undefined;
  /** Parameters whose intervals are wanted; undefined: all. */
  readonly free?: readonly string[] | undefined;
}

/** Most samples of a reading. */
const mostSamples = 2000;

/** Plans a tracer test before it is run: what to put in, when to sample, when to stop, and what it would tell. */
export function planTest(
  network: Network,
  trial: Trial,
  options: PlanOptions,
): { plan: Plan | undefined; problems: readonly Problem[] } {
  const { report, problems } = collector();
  const settings = settingsOfDay(network, trial, {});
  const { plant, problems: impossible } = compile(network, settings);
  if (!plant) return { plan: undefined, problems: impossible };
  const model = networkModel(network);
  const closed = isClosed(network);
  const origin = trial.injections[0]?.start ?? trial.contents?.begins ?? 0;
  const passages = closed ? [] : passagesOf(network, plant, trial);
  const longest = passages.reduce((m, p) => Math.max(m, p ? enough(p) : 0), 0);
  if (longest === 0 && options.until === undefined) {
    report("plan-endless", trial.at, {});
    return { plan: undefined, problems };
  }
  const lasting = trial.injections.reduce(
    (m, i) => Math.max(m, i.start - origin + (i.form.is === "pulse" ? i.lasting : 0)),
    0,
  );
  const stop = options.until ?? roundUp(longest + lasting);
  if (options.every !== undefined && stop / options.every > mostSamples) {
    report("plan-many", trial.at, { samples: Math.ceil(stop / options.every), most: mostSamples });
    return { plan: undefined, problems };
  }
  const curveAt = (times: readonly Float64Array[], of: Trial = trial): readonly Float64Array[] | undefined =>
    model.respond(
      of,
      {},
      times.map((time) => ({ time: time.map((t) => t + origin) })),
    );

  const fine = Float64Array.from({ length: 600 }, (_, i) => (stop * (i + 0.5)) / 600);
  const rough = curveAt(trial.readings.map(() => fine));
  if (!rough) return { plan: undefined, problems };
  const isPulse = trial.injections[0]?.form.is === "pulse";
  const times = trial.readings.map((_, i) => {
    if (options.every !== undefined) return evenClock(options.every, stop);
    const passage = passages[i];
    if (!passage) return evenClock(stop / options.samples, stop);
    const top = isPulse
      ? fine[rough[i].reduce((best, c, k) => (c > rough[i][best] ? k : best), 0)]
      : timeOf(passage, 0.5);
    return sampleClock(passage, top, stop, options.samples);
  });
  const curves = curveAt(times);
  if (!curves) return { plan: undefined, problems };
  const peaks = rough.map((y, i) => Math.max(highest(y), highest(curves[i])));
  const noise = trial.readings.map((r, i) => plannedNoise(r, peaks[i]));
  const clock = times.map((t) => t.map((x) => x + origin));
  const logged = asLogged(trial, clock, curves);
  const expected = expectedOf(network, logged, noise, options.free);
  const recommended = recommendedDose(trial, peaks, curves, noise, isPulse);
  const dose = doseOf(trial);
  const scale = recommended && dose ? recommended.value / dose.value.of([]) : undefined;
  const other = scale === undefined ? undefined : withDose(trial, scale);
  const withRecommended =
    other && scale !== undefined && Math.abs(scale - 1) > 0.02
      ? expectedOf(
          network,
          asLogged(
            other,
            clock,
            curves.map((y) => y.map((c) => scale * c)),
          ),
          noise,
          options.free,
        )
      : undefined;
  const { bands, stops } = bandOf(network, model, trial, times, origin, closed ? undefined : asStep(trial), longest);
  const readings = trial.readings.map((r, i): PlannedReading => {
    const passage = passages[i];
    return {
      at: r.at,
      unit: r.unit,
      isPulse,
      limits: r.limits,
      times: times[i],
      expected: curves[i],
      sd: curves[i].map(noise[i].sd),
      band: bands?.[i],
      peak: peaks[i],
      end: curves[i][curves[i].length - 1],
      noise: { floor: noise[i].floor, assumed: noise[i].assumed },
      t10: passage && t10Error(times[i], curves[i], noise[i], isPulse, timeOf(passage, 0.1)),
      best: bestTimes(network, trial, i, times, origin, noise, curveAt, options.free),
    };
  });
  const [first] = passages;
  const meanTime = first?.mean;
  const stopsOf = first ? [3 * first.mean, 5 * first.mean, stop] : [];
  const truncation = first && isPulse ? apartStops(stopsOf).map((t) => truncated(first, t)) : [];
  const atStop = first && truncated(first, stop);
  const flow = (at: string): number | undefined => plant.feeds.find((f) => f.name === at)?.flow;
  const alarms = [
    ...(atStop ? truncationAlarm(atStop, network.units.time, isPulse) : []),
    ...readings.flatMap((r, i) => readingAlarms(r, noise[i])),
    ...(meanTime === undefined ? [] : injectionAlarms(trial, flow, meanTime)),
    ...readings.flatMap((r, i) => atOnceAlarms(r.at, passages[i]?.F[0] ?? 0, isPulse, longestInjection(trial))),
    ...(expected ? parameterAlarms(expected.parameters, expected.confounded) : []),
  ];
  const plan: Plan = {
    dose: dose && { value: dose.value.of([]), unit: dose.unit, is: dose.is },
    recommended,
    stop,
    stopWithin: stops,
    meanTime,
    readings,
    parameters: expected?.parameters ?? [],
    withRecommended: withRecommended?.parameters,
    truncation,
    alarms,
    cautions: cautionsOf(network, trial),
  };
  return { plan, problems };
}

const highest = (y: Float64Array): number => y.reduce((m, c) => Math.max(m, c), 0);

/** Two digits, upwards: an end that a clock in the field can keep. */
function roundUp(seconds: number): number {
  const unit =
    seconds > 36_000
      ? 1800
      : seconds > 3600
        ? 300
        : seconds > 600
          ? 60
          : seconds > 60
            ? 10
            : 10 ** Math.floor(Math.log10(seconds) - 1);
  return Math.ceil(seconds / unit) * unit;
}

/** How tracer comes through to every reading, at the values of the file. */
/** Ascending; of stops within 1 % of one another the last. */
const apartStops = (stops: readonly number[]): readonly number[] =>
  [...stops].sort((a, b) => a - b).filter((t, k, all) => k === all.length - 1 || all[k + 1] > 1.01 * t);

const longestInjection = (trial: Trial): number => Math.max(0, ...trial.injections.map((i) => i.lasting));

function passagesOf(network: Network, liquid: Plant, trial: Trial): (Passage | undefined)[] {
  const step = asStep(trial);
  if (!step) return trial.readings.map(() => undefined);
  const retained = trial.tracer?.retained;
  const plant = tracerPlant(liquid, retained && { retained });
  const horizon = settlingTime(plant, trial.injections[0].at, 0.9999, 40);
  const time = Float64Array.from({ length: 3001 }, (_, i) => (horizon * i) / 3000);
  const curves = networkModel(network).respond(
    step,
    {},
    trial.readings.map(() => ({ time })),
  );
  return trial.readings.map((_, i) => curves && passageOf(time, curves[i]));
}

/** Enough for a peak of 100 times the noise and a last sample of 3 times, and not above the detector's limit. */
function recommendedDose(
  trial: Trial,
  peaks: readonly number[],
  curves: readonly Float64Array[],
  noise: readonly PlannedNoise[],
  isPulse: boolean,
): Plan["recommended"] {
  const dose = doseOf(trial);
  if (!dose || noise.some((n) => n.assumed || !(n.floor > 0)) || peaks.some((p) => !(p > 0))) return undefined;
  const given = dose.value.of([]);
  const forPeak = Math.max(...peaks.map((p, i) => ((isPulse ? 100 : 50) * noise[i].floor) / p));
  const forEnd = isPulse
    ? Math.max(...curves.map((y, i) => (y[y.length - 1] > 0 ? (3 * noise[i].floor) / y[y.length - 1] : 0)))
    : 0;
  const most = Math.min(...peaks.map((p, i) => (trial.readings[i].limits.above ?? Number.POSITIVE_INFINITY) / p));
  const wanted = Math.max(forPeak, Math.min(forEnd, 10 * forPeak));
  const capped = Math.min(wanted, 0.8 * most);
  const because =
    capped < wanted
      ? "80 % of the detector's limit, which is less than noise and tail ask for"
      : forEnd > 10 * forPeak
        ? "ten times what the peak needs; the end of the tail sinks into the noise all the same"
        : forEnd > forPeak
          ? "the last sample at three times the noise"
          : isPulse
            ? "a peak of 100 times the noise"
            : "a step of 50 times the noise";
  return { value: capped * given, because };
}
