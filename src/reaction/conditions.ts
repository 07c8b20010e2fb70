import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { bindKinetics, type Reactions } from "./kinetics.js";
import { placesByNode } from "./places.js";

/** Values to use in place of a duty's, SI, by name: `k1`, `feed.A`, `bulk.k1` (local), `temperature`. Unknown names have no effect. */
export type DutySettings = Readonly<Record<string, number>>;

/** A duty in numbers: what each feed of a plant brings, and the kinetics at its constants and temperature. */
export interface Conditions {
  readonly species: readonly string[];
  /** Components of a mixture. */
  readonly size: number;
  /** Per feed of the plant, each component of what it brings, SI. */
  readonly feeds: readonly Float64Array[];
  /** What counts as 1, per component, SI. */
  readonly scale: Float64Array;
  /** Where nothing of its own holds. */
  readonly reactions: Reactions;
  /** What reacts in a node of the plant: `reactions` unless the duty says otherwise for the body that it belongs to. */
  reactionsAt(node: number): Reactions;
  /** True where that differs from node to node. */
  readonly varied: boolean;
  /** What one unit of each reaction makes, anywhere in the plant, scaled: what none of them changes only mixes. */
  readonly numbers: readonly Float64Array[];
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
  const scale = scales([...feeds, ...otherLevels(duty, species)], species.length, duty.concentrations);
  const reacting = chemistry ?? { species, reactions: [] };
  const reactionsWith = (places: readonly string[]): Reactions => {
    const constants = chemistry ? constantsOf(chemistry, duty, settings, places) : [];
    const cell = bindKinetics(reacting, constants, scale, "limited");
    return { cell, tube: bindKinetics(reacting, constants, scale, "cut"), pocket: cell };
  };
  const reactions = reactionsWith([]);
  const placed = placesByNode(plant, [...(duty.local?.keys() ?? [])]);
  const own = new Map([...new Set(placed.values())].map((places) => [places, reactionsWith(places)]));
  return {
    species,
    size: species.length,
    feeds,
    scale,
    reactions,
    reactionsAt: (node) => own.get(placed.get(node) ?? []) ?? reactions,
    varied: own.size > 0,
    numbers: [reactions, ...own.values()].flatMap(({ cell }) => cell.numbers),
  };
}

/**
 * Constants of a chemistry at a duty, then the temperature: the tail of an Env. SI.
 * @param places names under the duty's `local:` whose constants hold, later ones before earlier ones
 */
export function constantsOf(
  chemistry: Chemistry,
  duty: Duty,
  settings: DutySettings = {},
  places: readonly string[] = [],
): Float64Array {
  const n = chemistry.species.length;
  const env = new Float64Array(chemistry.temperatureSlot + 1);
  const local = new Map(
    places.flatMap((place) =>
      [...(duty.local?.get(place)?.constants ?? [])].map(([name, { value }]) => [
        name,
        settings[`${place}.${name}`] ?? value.of([]),
      ]),
    ),
  );
  // Only a chemistry that does not ask for the temperature may be without one.
  env[chemistry.temperatureSlot] = settings.temperature ?? duty.temperature?.of([]) ?? Number.NaN;
  for (const k of chemistry.order) {
    const { name, value } = chemistry.constants[k];
    env[n + k] = local.get(name) ?? settings[name] ?? duty.with.get(name)?.value.of([]) ?? value.of(env);
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
  for (const [place, { constants }] of duty.local ?? []) {
    for (const [name, { value }] of constants) add(`${place}.${name}`, value.of([]), value.sd?.([]));
  }
  if (duty.temperature) add("temperature", duty.temperature.of([]), duty.temperature.sd?.([]));
  return inputs;
}

const fedSpecies = (duty: Duty): string[] => [
  ...new Set([...duty.feeds.values()].flatMap((feed) => [...feed.species.keys()])),
];

/** What is there besides what is fed before a change: at the start, and after it. */
function otherLevels(duty: Duty, species: readonly string[]): Float64Array[] {
  const held = [...(duty.contents?.levels.values() ?? [])].map((level) =>
    Float64Array.from(species, (s) => level.species.get(s)?.value.of([]) ?? 0),
  );
  const courses = [...duty.feeds.values()].map(({ courses }) =>
    Float64Array.from(species, (s) => {
      const course = courses?.get(s);
      return course?.is === "upset" ? course.to.of([]) : Math.max(0, ...(course?.values ?? []));
    }),
  );
  return [...held, ...courses];
}

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
