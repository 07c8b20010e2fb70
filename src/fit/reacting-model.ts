import { compiler } from "../compile/compile.js";
import type { Plant, Settings } from "../compile/plant.js";
import { unstirred } from "../compile/unstirred.js";
import type { Duty } from "../model/duty.js";
import { isClosed, type Network } from "../model/network.js";
import type { Reacting, Trial } from "../model/trial.js";
import type { Problem } from "../problems/problem.js";
import { problem } from "../problems/report.js";
import { constantsOf } from "../reaction/constants.js";
import { followFlask } from "../reaction/flask.js";
import { steadyState } from "../reaction/steady.js";
import type { ForwardModel, WantedTimes } from "./forward.js";
import { constantsIn } from "./kinetics.js";
import { type Respond, slopesBy } from "./reacting-slopes.js";
import { settingsOfDay } from "./settings.js";

const unmoved: ReadonlyMap<string, number> = new Map();

type Compile = (settings: Settings) => Plant | undefined;

/**
 * What trials of reactions give, as a forward model: a flask followed in time, a fed vessel where it has settled.
 * Derivatives by central differences of the trial alone.
 * @param network with the parameters of the chemistries among its own
 */
export function reactingModel(network: Network): ForwardModel {
  const known = new Map<Network, Compile>();
  const compileOf = (vessel: Network): Compile => {
    const found = known.get(vessel);
    if (found) return found;
    const { compile } = compiler(vessel);
    const made: Compile = (settings) => compile(settings).plant;
    known.set(vessel, made);
    return made;
  };
  const respond: Respond = (trial, values, wanted, day) => {
    const { reacting } = trial;
    if (!reacting) return undefined;
    const constants = constantsOfTrial(network, trial, reacting, values);
    const vessel = reacting.vessel;
    const settings: Record<string, number> = vessel
      ? Object.fromEntries([...trial.with].map(([name, value]) => [name, value.of([])]))
      : { ...settingsOfDay(network, trial, values) };
    for (const [name, by] of day) settings[name] = (settings[name] ?? 0) + by;
    const plant = compileOf(vessel ?? network)(settings);
    if (!plant || !(vessel ?? network).requires.every((r) => r.slack(plant.env) >= 0)) return undefined;
    const curves = isClosed(plant)
      ? inFlask(plant, trial, reacting, constants, wanted)
      : settled(plant, trial, reacting, constants, wanted);
    return curves?.every((c) => c.every(Number.isFinite)) ? curves : undefined;
  };
  return {
    respond: (trial, values, wanted) => respond(trial, values, wanted, unmoved),
    slopes: (trial, at, wanted, directions) => slopesBy(respond, network, trial, at, wanted, directions),
    delays: () => [],
  };
}

/** The operating point of a trial, as a duty would have it. */
const dutyOf = (trial: Trial, { chemistry, at, temperature, feeds, concentrations }: Reacting): Duty => ({
  title: trial.title,
  at,
  path: trial.path,
  chemistry,
  flows: new Map(),
  with: new Map(),
  settings: new Map(),
  feeds,
  temperature,
  concentrations,
  report: [],
});

/** Constants of the chemistry on the day, SI by name: parameters as set, what the day set otherwise, declared `±` as shifted. */
function constantsOfTrial(
  network: Network,
  trial: Trial,
  reacting: Reacting,
  values: Settings,
): Record<string, number> {
  const { chemistry, shifted } = reacting;
  const set = constantsIn(network, chemistry, values);
  for (const { name } of chemistry.constants) {
    const value = trial.with.get(name);
    if (value) set[name] = value.of([]);
  }
  if (!shifted || shifted.size === 0) return set;
  const n = chemistry.species.length;
  const env = new Float64Array(chemistry.temperatureSlot + 1);
  for (const [name, deviations] of shifted) {
    env.set(constantsOf(chemistry, dutyOf(trial, reacting), set), n);
    const k = chemistry.constants.findIndex((c) => c.name === name);
    set[name] = env[n + k] + deviations * (chemistry.constants[k].value.sd?.(env) ?? 0);
  }
  return set;
}

function settled(
  plant: Plant,
  trial: Trial,
  reacting: Reacting,
  constants: Record<string, number>,
  wanted: WantedTimes,
): Float64Array[] | undefined {
  const state = steadyState(plant, reacting.chemistry, dutyOf(trial, reacting), constants);
  if (!state.converged) return undefined;
  const n = state.species.length;
  return trial.readings.map(({ places, of }, r) => {
    const c = places.reduce((sum, { name, share }) => {
      const node = plant.exit.get(name) ?? -1;
      return sum + share * state.concentrations[node * n + (of?.species ?? 0)];
    }, 0);
    return new Float64Array(wanted[r].time.length).fill(c * (of?.factor ?? 1));
  });
}

function inFlask(
  plant: Plant,
  trial: Trial,
  reacting: Reacting,
  constants: Record<string, number>,
  wanted: WantedTimes,
): Float64Array[] | undefined {
  const { chemistry, begins } = reacting;
  const n = chemistry.species.length;
  const since = (t: number, { line }: Trial["readings"][number]): number =>
    Math.max(0, t - begins - (line.delay?.of([]) ?? 0));
  const times = new Set(trial.readings.flatMap((reading, r) => Array.from(wanted[r].time, (t) => since(t, reading))));
  const all = Float64Array.from(times).sort();
  const states = followFlask(
    {
      plant,
      chemistry,
      constants: constantsOf(chemistry, dutyOf(trial, reacting), constants),
      start: startIn(plant, reacting),
    },
    all,
  );
  if (!states) return undefined;
  const index = new Map(Array.from(all, (t, k) => [t, k]));
  return trial.readings.map((reading, r) => {
    const { places, of } = reading;
    return wanted[r].time.map((t) => {
      const state = states[index.get(since(t, reading)) ?? 0];
      const mixed = places.reduce(
        (sum, { name, share }) => sum + share * state[(plant.exit.get(name) ?? 0) * n + (of?.species ?? 0)],
        0,
      );
      return mixed * (of?.factor ?? 1);
    });
  });
}

/** What every body holds at the start: by its own name, that of the row it is a member of, or `all`. */
function startIn({ columns }: Plant, { chemistry, contents }: Reacting): Float64Array {
  const n = chemistry.species.length;
  const start = new Float64Array(columns.size * n);
  for (let node = 0; node < columns.size; node++) {
    const name = columns.nameOf(node);
    const held =
      contents.get(name) ?? contents.get(name.slice(0, Math.max(0, name.lastIndexOf(".")))) ?? contents.get("all");
    for (const [species, { value }] of held?.species ?? [])
      start[node * n + chemistry.species.findIndex((s) => s.name === species)] = value.of([]);
  }
  return start;
}

/** A model that follows tracers by one model and reactions by another. */
export function jointModel(tracer: ForwardModel, reacting: ForwardModel): ForwardModel {
  const of = (trial: Trial): ForwardModel => (trial.reacting ? reacting : tracer);
  return {
    respond: (trial, values, wanted) => of(trial).respond(trial, values, wanted),
    slopes: (trial, at, wanted, directions) => of(trial).slopes?.(trial, at, wanted, directions),
    delays: (trial, values) => of(trial).delays(trial, values),
  };
}

/** Why trials of reactions cannot be followed in their vessels; empty where they can. */
export function cannotFollow(network: Network, trials: readonly Trial[]): Problem[] {
  return trials.flatMap(({ reacting }) => {
    const vessel = reacting && (reacting.vessel ?? network);
    if (!vessel || !isClosed(vessel)) return [];
    const { plant, problems } = compiler(vessel).compile({});
    const name = plant && unstirred(plant);
    return name === undefined ? problems : [problem("flask-body", vessel.at, { name })];
  });
}
