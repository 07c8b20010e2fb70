import { compiler } from "../compile/compile.js";
import type { Plant, Settings } from "../compile/plant.js";
import type { Duty, DutyFeed } from "../model/duty.js";
import type { Network } from "../model/network.js";
import type { Reacting, Trial } from "../model/trial.js";
import { constantsOf } from "../reaction/constants.js";
import type { Flask } from "../reaction/flask.js";
import { constantsIn } from "./kinetics.js";
import { settingsOfDay } from "./settings.js";

/** Where a trial of a reaction is looked at. */
export interface Point {
  readonly trial: Trial;
  readonly values: Settings;
  /** By how much what the day set is moved, by name, SI. */
  readonly day: ReadonlyMap<string, number>;
}

/** A trial of a reaction in numbers. */
export interface Scene {
  readonly trial: Trial;
  readonly reacting: Reacting;
  readonly plant: Plant;
  /** Constants of the chemistry that are not those of its file, SI by name. */
  readonly constants: Readonly<Record<string, number>>;
}

/**
 * Puts points into numbers; undefined where the values make no vessel.
 * @param network with the parameters of the chemistries among its own
 */
export function sceneMaker(network: Network): (point: Point) => Scene | undefined {
  const known = new Map<Network, (settings: Settings) => Plant | undefined>();
  const compileOf = (vessel: Network): ((settings: Settings) => Plant | undefined) => {
    const found = known.get(vessel);
    if (found) return found;
    const { compile } = compiler(vessel);
    const made = (settings: Settings): Plant | undefined => compile(settings).plant;
    known.set(vessel, made);
    return made;
  };
  return ({ trial, values, day }) => {
    const { reacting } = trial;
    if (!reacting) return undefined;
    const vessel = reacting.vessel ?? network;
    const settings: Record<string, number> = reacting.vessel
      ? Object.fromEntries([...trial.with].map(([name, value]) => [name, value.of([])]))
      : { ...settingsOfDay(network, trial, values) };
    for (const [name, by] of day) settings[name] = (settings[name] ?? 0) + by;
    const plant = compileOf(vessel)(settings);
    if (!plant || !vessel.requires.every((r) => r.slack(plant.env) >= 0)) return undefined;
    return { trial, reacting, plant, constants: constantsOfTrial(network, trial, reacting, values) };
  };
}

/** The operating point of a trial, as a duty would have it. */
export const dutyOf = (
  trial: Trial,
  { chemistry, at, temperature, feeds, contents, concentrations }: Reacting,
): Duty => ({
  title: trial.title,
  at,
  path: trial.path,
  chemistry,
  flows: new Map(),
  with: new Map(),
  settings: new Map(),
  feeds,
  ...(contents.size > 0 ? { contents: { at, levels: contents } } : {}),
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

/** A scene in a closed vessel. */
export const flaskOf = ({ trial, reacting, plant, constants }: Scene): Flask => ({
  plant,
  chemistry: reacting.chemistry,
  constants: constantsOf(reacting.chemistry, dutyOf(trial, reacting), constants),
  start: startIn(plant, reacting),
});

/** What every body holds at the start: by its own name, that of the row it is a member of, or `all`. */
function startIn({ columns }: Plant, { chemistry, contents }: Reacting): Float64Array {
  const n = chemistry.species.length;
  const start = new Float64Array(columns.size * n);
  for (let node = 0; node < columns.size; node++) {
    const held = heldBy(contents, columns.nameOf(node));
    for (const [species, { value }] of held?.species ?? [])
      start[node * n + chemistry.species.findIndex((s) => s.name === species)] = value.of([]);
  }
  return start;
}

/** What a body holds: by the longest name that it lies under, else by `all`. */
function heldBy(contents: Reacting["contents"], node: string): DutyFeed | undefined {
  for (let name = node; name !== ""; name = name.slice(0, Math.max(0, name.lastIndexOf(".")))) {
    const held = contents.get(name);
    if (held) return held;
  }
  return contents.get("all");
}
