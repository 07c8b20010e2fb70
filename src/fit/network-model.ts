import { compiler } from "../compile/compile.js";
import { evaluateNames } from "../compile/evaluate.js";
import { Part, type Plant, type Settings } from "../compile/plant.js";
import { type PlantSlope, PlantSlopes } from "../compile/plant-slopes.js";
import { ValueSlopes } from "../compile/value-slopes.js";
import { isClosed, type Network } from "../model/network.js";
import { factKey, type Trial } from "../model/trial.js";
import { RefusedError } from "../problems/refused.js";
import type { Replay } from "../simulate/replay.js";
import { trialResponse } from "../simulate/trial.js";
import { hasSlopes, type Move, trialSlopes } from "../simulate/trial-slopes.js";
import type { At, Direction, ForwardModel, WantedTimes } from "./forward.js";
import { Replays, setOnDay } from "./replays.js";
import { settingsOfDay } from "./settings.js";

/** Values in the order of a recording's inputs, facts as the trial has them moved; undefined where others are set. */
function inputsOf({ inputs: names, facts }: Replay, values: Settings, { moved }: Trial): Float64Array | undefined {
  const inputs = new Float64Array(names.length + facts.length);
  for (let i = 0; i < names.length; i++) {
    const x = values[names[i]];
    if (x === undefined) return undefined;
    inputs[i] = x;
  }
  if (moved) for (let k = 0; k < facts.length; k++) inputs[names.length + k] = moved.by.get(facts[k]) ?? 0;
  return Object.keys(values).length === names.length ? inputs : undefined;
}

/** How the inputs move, by input and direction; undefined where more than they do. */
function seedsOf({ inputs: names, facts }: Replay, directions: readonly Direction[]): Float64Array | undefined {
  const count = directions.length;
  const seeds = new Float64Array((names.length + facts.length) * count);
  for (const [d, direction] of directions.entries()) {
    const moves = [...direction.names].map(([name, slope]) => ({ at: names.indexOf(name), slope }));
    for (const [key, slope] of factMoves(direction)) {
      const k = facts.indexOf(key);
      moves.push({ at: k < 0 ? k : names.length + k, slope });
    }
    for (const { at, slope } of moves) {
      if (at < 0) return undefined;
      seeds[at * count + d] = slope;
    }
  }
  return seeds;
}

/** What of a trial's facts a direction moves, SI per unit. */
function factMoves({ day, dose, line, changed }: Direction): [string, number][] {
  if (changed) return [["what no recording knows", 1]];
  return [
    ...[...(day ?? [])].map(([name, slope]): [string, number] => [factKey.day(name), slope]),
    ...(dose ? [[factKey.dose(dose.injection), dose.slope] as [string, number]] : []),
    ...(["delay", "lag"] as const).flatMap((part): [string, number][] =>
      line && line[part] !== 0 ? [[factKey.line(line.reading, part), line[part]]] : [],
    ),
  ];
}

/** Plants that are kept: those of a point are asked for again, once for every trial. */
const mostKept = 8;

/** The exact tracer response of a network as a forward model, with derivatives. It keeps the plants of the last values asked for. */
export function networkModel(network: Network): ForwardModel {
  const { compile, plan } = compiler(network);
  const derived = new ValueSlopes(network);
  const kept: { trial: Trial; values: Settings; plant: Plant | undefined }[] = [];
  const plantFor = (trial: Trial, values: Settings): Plant | undefined => {
    const known = kept.find((k) => k.values === values && k.trial === trial);
    if (known) return known.plant;
    const { plant: made } = compile(settingsOfDay(network, trial, values));
    const plant = made && network.requires.every((r) => r.slack(made.env) >= 0) ? made : undefined;
    if (kept.length === mostKept) kept.shift();
    kept.push({ trial, values, plant });
    return plant;
  };
  /** How the plant of the day moves with the names. */
  const plantMoves = (trial: Trial, { values, shifted }: At, plant: Plant, directions: readonly Direction[]) => {
    const isSet = (name: string): boolean => name in values && !shifted.has(name);
    const env = trial.flows.size + trial.with.size > 0 ? evaluateNames(network, values) : plant.env;
    const onDay = setOnDay(trial);
    const set = new Set(onDay.map(({ name }) => name));
    const plants = new PlantSlopes(network, plant, plan, derived);
    return directions.map(({ names, day }): { plant: PlantSlope | undefined } | undefined => {
      if (names.size === 0 && !day) return { plant: undefined };
      const before = derived.names(env, isSet, names);
      const moved = new Map(names);
      for (const { name, value } of onDay) moved.set(name, derived.along(value, env, before) + (day?.get(name) ?? 0));
      const slope = set.size > 0 ? derived.names(plant.env, (n) => isSet(n) || set.has(n), moved) : before;
      const along = plants.along(slope);
      return along && { plant: along };
    });
  };
  const replays = new Replays(network, plan);
  const noSeeds = new Float64Array(0);
  const nothing: ReadonlySet<string> = new Set();
  /** By a recording; undefined where none holds. */
  const ask = <T>(trial: Trial, values: Settings, of: (replay: Replay, inputs: Float64Array) => T | undefined) => {
    for (const replay of replays.of(trial)) {
      const inputs = inputsOf(replay, values, trial);
      if (inputs) return of(replay, inputs);
    }
    return undefined;
  };
  const replayed = (
    trial: Trial,
    values: Settings,
    wanted: WantedTimes,
    directions: readonly Direction[],
    shifted: ReadonlySet<string> = nothing,
  ) =>
    ask(trial, values, (replay, inputs) => {
      if (replay.inputs.some((name) => shifted.has(name) && !replay.staysShifted(name))) return undefined;
      const seeds = directions.length === 0 ? noSeeds : seedsOf(replay, directions);
      return seeds && replay.run(inputs, wanted, seeds, directions.length);
    });
  const horizonOf = (wanted: WantedTimes): number =>
    wanted.reduce((m, { time }) => Math.max(m, time[time.length - 1] ?? 0), 0);
  return {
    keep: (trials) => replays.keep(trials),
    respond(trial, values, wanted) {
      const quick = replayed(trial, values, wanted, []);
      if (quick) return quick.curves;
      const plant = plantFor(trial, values);
      if (!plant) return undefined;
      if (replays.record(trial, values, plant, horizonOf(wanted))) {
        const now = replayed(trial, values, wanted, []);
        if (now) return now.curves;
      }
      try {
        return hasSlopes(plant, trial)
          ? trialSlopes(plant, trial, wanted, []).curves
          : trialResponse(plant, trial, wanted);
      } catch (e) {
        // Values with which tracer goes round a closed vessel too often are no better than an impossible vessel.
        if (e instanceof RefusedError && isClosed(plant)) return undefined;
        throw e;
      }
    },
    slopes(trial, at, wanted, directions) {
      const quick = replayed(trial, at.values, wanted, directions, at.shifted);
      if (quick) return quick;
      const plant = plantFor(trial, at.values);
      if (!plant || !hasSlopes(plant, trial)) return undefined;
      const known: number[] = [];
      const moves = plantMoves(trial, at, plant, directions).flatMap((m, d): Move[] => {
        if (!m) return [];
        known.push(d);
        const { dose, line } = directions[d];
        return [{ ...(m.plant ? { plant: m.plant } : {}), ...(dose ? { dose } : {}), ...(line ? { line } : {}) }];
      });
      const response = trialSlopes(plant, trial, wanted, moves);
      const slopes: (readonly Float64Array[] | undefined)[] = directions.map(() => undefined);
      known.forEach((d, k) => {
        slopes[d] = response.slopes[k];
      });
      return { curves: response.curves, slopes };
    },
    delays: (trial, values) => {
      const quick = ask(trial, values, (replay, inputs) => replay.delays(inputs));
      if (quick) return quick;
      const plant = plantFor(trial, values);
      if (plant && replays.record(trial, values, plant, 0)) {
        const now = ask(trial, values, (replay, inputs) => replay.delays(inputs));
        if (now) return now;
      }
      const tubes = plant?.nodes.filter((n) => n.part === Part.Delay) ?? [];
      return tubes.map((n) => (n.inflow > 0 ? n.volume / n.inflow : Number.POSITIVE_INFINITY));
    },
  };
}
