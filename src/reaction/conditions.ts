import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { bindKinetics, type Reactions } from "./kinetics.js";

/** Values to use in place of a duty's, SI, by name: `k1`, `feed.A`, `temperature`. Unknown names have no effect. */
export type DutySettings = Readonly<Record<string, number>>;

/** A duty in numbers: what each feed of a plant brings, and the kinetics at its constants and temperature. */
export interface Conditions {
  readonly species: readonly string[];
  /** Per feed of the plant, concentration of each species, SI. */
  readonly feeds: readonly Float64Array[];
  /** Concentration (SI) that counts as 1, per species. */
  readonly scale: Float64Array;
  readonly reactions: Reactions;
}

/** A quantity that a duty rests on, and how well it is known: what an interval has to carry. */
export interface DutyInput {
  /** As in `DutySettings`; flows (`feed.flow`) and values of the network as `compile` takes them. */
  readonly name: string;
  readonly value: number;
  /** One standard deviation as declared, SI. */
  readonly sd: number;
}

/** Puts a duty into numbers. Species without a feed value are fed at 0. */
export function conditionsOf(
  plant: Plant,
  chemistry: Chemistry | undefined,
  duty: Duty,
  settings: DutySettings = {},
): Conditions {
  const species = chemistry ? chemistry.species.map((s) => s.name) : fedSpecies(duty);
  const feeds = plant.feeds.map(({ name }) =>
    Float64Array.from(
      species,
      (s) => settings[`${name}.${s}`] ?? duty.feeds.get(name)?.species.get(s)?.value.of([]) ?? 0,
    ),
  );
  const scale = scales(feeds, species.length, duty.concentrations);
  const reacting = chemistry ?? { species, reactions: [] };
  const constants = chemistry ? constantsOf(chemistry, duty, settings) : [];
  const reactions = {
    cell: bindKinetics(reacting, constants, scale, "limited"),
    tube: bindKinetics(reacting, constants, scale, "cut"),
  };
  return { species, feeds, scale, reactions };
}

/** Constants of a chemistry at a duty, then the temperature: the tail of an Env. SI. */
export function constantsOf(chemistry: Chemistry, duty: Duty, settings: DutySettings = {}): Float64Array {
  const n = chemistry.species.length;
  const env = new Float64Array(chemistry.temperatureSlot + 1);
  // Only a chemistry that does not ask for the temperature may be without one.
  env[chemistry.temperatureSlot] = settings.temperature ?? duty.temperature?.of([]) ?? Number.NaN;
  for (const k of chemistry.order) {
    const { name, value } = chemistry.constants[k];
    env[n + k] = settings[name] ?? duty.with.get(name)?.value.of([]) ?? value.of(env);
  }
  return env.slice(n);
}

/** Everything that the duty and its chemistry declare with a `±`. */
export function dutyInputs(chemistry: Chemistry | undefined, duty: Duty): DutyInput[] {
  const inputs: DutyInput[] = [];
  const add = (name: string, value: number, sd: number | undefined): void => {
    if (sd !== undefined && sd > 0) inputs.push({ name, value, sd });
  };
  if (chemistry) {
    const n = chemistry.species.length;
    const env = new Float64Array(chemistry.temperatureSlot + 1);
    const numbers = constantsOf(chemistry, duty);
    env.set(numbers, n);
    chemistry.constants.forEach(({ name, value }, k) => {
      const otherwise = duty.with.get(name)?.value;
      add(name, numbers[k], (otherwise ?? value).sd?.(otherwise ? [] : env));
    });
  }
  for (const [feed, { value }] of duty.flows) add(`${feed}.flow`, value.of([]), value.sd?.([]));
  for (const [name, { value }] of duty.settings) add(name, value.of([]), value.sd?.([]));
  for (const [feed, { species }] of duty.feeds) {
    for (const [name, { value }] of species) add(`${feed}.${name}`, value.of([]), value.sd?.([]));
  }
  if (duty.temperature) add("temperature", duty.temperature.of([]), duty.temperature.sd?.([]));
  return inputs;
}

const fedSpecies = (duty: Duty): string[] => [
  ...new Set([...duty.feeds.values()].flatMap((feed) => [...feed.species.keys()])),
];

/** Each species by its own largest feed; one that is not fed by the largest of those that are counted as it is. */
function scales(feeds: readonly Float64Array[], n: number, kinds: readonly Dimension[]): Float64Array {
  const own = Float64Array.from({ length: n }, (_, i) => Math.max(0, ...feeds.map((feed) => feed[i])));
  const alike = (i: number, j: number): boolean => {
    const [a, b] = [kinds[i] ?? dimensions.ratio, kinds[j] ?? dimensions.ratio];
    return a.every((x, d) => x === b[d]);
  };
  return own.map((largest, i) => {
    if (largest > 0) return largest;
    const kin = Math.max(0, ...own.filter((_, j) => alike(i, j)));
    return kin > 0 ? kin : 1;
  });
}

/** What a duty sets in a network: flows and values by name, as `compile` takes them. SI. */
export function networkSettings(duty: Duty): Record<string, number> {
  const flows = [...duty.flows].map(([feed, { value }]) => [`${feed}.flow`, value.of([])] as const);
  const values = [...duty.settings].map(([name, { value }]) => [name, value.of([])] as const);
  return Object.fromEntries([...flows, ...values]);
}
