import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { constantsOf, type DutySettings } from "./constants.js";
import { exchangersOf, type FeedExchanger, sizeName } from "./exchangers.js";
import { holdings } from "./holdings.js";
import { behindWall, type Wall, wallsOf } from "./jacket.js";
import { bindKinetics, type Reactions } from "./kinetics.js";
import { placesByNode } from "./places.js";
import { heatName, thermalOf } from "./thermal.js";

export { constantsOf, type DutySettings } from "./constants.js";

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
  /** Where heat is balanced: the temperature, K, is then the last component of every mixture. */
  readonly heat?: {
    /** J/(m3 K). */
    readonly capacity: number;
    wallAt(node: number): Wall | undefined;
    readonly exchangers: readonly FeedExchanger[];
  };
  /** What one unit of each reaction makes, anywhere in the plant, scaled: what none of them changes only mixes. */
  readonly numbers: readonly Float64Array[];
  /** Species of which nothing is left at or below `depleted`, scaled: what a mixed cell still shows there is the guard of a zero-order law. */
  readonly spends: readonly number[];
  /** What each node holds before anything happens, scaled: where a steady state is come to from. Undefined: what is fed. */
  readonly holds?: (node: number) => Float64Array;
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
  const heat = chemistry && duty.heat ? { chemistry, capacity: heatCapacityOf(chemistry, settings) } : undefined;
  const feeds = plant.feeds.map(({ name }) => {
    const feed = duty.feeds.get(name);
    const brought = species.map((s) => settings[`${name}.${s}`] ?? feed?.species.get(s)?.value.of([]) ?? 0);
    const warm = settings[`${name}.temperature`] ?? feed?.temperature?.of([]) ?? Number.NaN;
    return Float64Array.from(heat ? [...brought, warm] : brought);
  });
  const { held, brought } = otherLevels(duty, species);
  const scale = scales([...feeds, ...brought], held, species.length, duty.concentrations);
  const reacting = chemistry ?? { species, reactions: [] };
  const spends = new Set<number>();
  const reactionsWith = (places: readonly string[]): Reactions => {
    const constants = chemistry ? constantsOf(chemistry, duty, settings, places) : [];
    const thermal = heat && thermalOf(heat.chemistry, duty, settings, heat.capacity);
    const cell = bindKinetics(reacting, constants, scale, "limited", thermal);
    cell.spends.forEach((spent, i) => {
      if (spent) spends.add(i);
    });
    return { cell, tube: bindKinetics(reacting, constants, scale, "cut", thermal), pocket: cell };
  };
  const reactions = reactionsWith([]);
  const placed = placesByNode(plant, [
    ...new Set([...(duty.local?.keys() ?? []), ...(duty.heat?.jackets.keys() ?? [])]),
  ]);
  const wallAt = wallsOf(plant, duty, settings, placed);
  const bare = new Map([...new Set(placed.values())].map((places) => [places, reactionsWith(places)]));
  const walled = new Map<Reactions, Reactions>();
  const own = new Map<number, Reactions>();
  for (const [node, places] of placed) {
    const here = bare.get(places) ?? reactions;
    const wall = wallAt(node);
    if (wall && heat) walled.set(here, walled.get(here) ?? behindWall(here, wall, heat.capacity));
    own.set(node, (wall && walled.get(here)) ?? here);
  }
  return {
    species,
    size: scale.length,
    feeds,
    scale,
    reactions,
    reactionsAt: (node) => own.get(node) ?? reactions,
    varied: own.size > 0,
    numbers: [...new Set([reactions, ...own.values()])].flatMap(({ cell }) => cell.numbers),
    spends: [...spends],
    ...(duty.contents ? { holds: holdings(plant, { species, scale, feeds }, duty.contents, settings) } : {}),
    ...(heat
      ? { heat: { capacity: heat.capacity, wallAt, exchangers: exchangersOf(plant, duty, heat.capacity, settings) } }
      : {}),
  };
}

/** Heat capacity of the liquid, J/(m3 K). */
const heatCapacityOf = ({ heatCapacity }: Chemistry, settings: DutySettings): number =>
  settings["heat-capacity"] ?? heatCapacity?.of([]) ?? Number.NaN;

/** Everything that the duty and its chemistry declare with a `±`. */
export function dutyInputs(chemistry: Chemistry | undefined, duty: Duty): DutyInput[] {
  const inputs: DutyInput[] = [];
  const add = (name: string, value: number, sd: number | undefined): void => {
    if (sd !== undefined && sd > 0) inputs.push({ name, value, sd });
  };
  if (chemistry) {
    const env = envAt(chemistry, duty);
    chemistry.constants.forEach(({ name, value }, k) => {
      const otherwise = duty.with.get(name)?.value;
      add(name, env[chemistry.species.length + k], (otherwise ?? value).sd?.(otherwise ? [] : env));
    });
  }
  for (const [feed, { value }] of duty.flows) add(`${feed}.flow`, value.of([]), value.sd?.([]));
  for (const [name, { value }] of duty.settings) add(name, value.of([]), value.sd?.([]));
  for (const [feed, { species, courses }] of duty.feeds) {
    for (const [name, { value }] of species) add(`${feed}.${name}`, value.of([]), value.sd?.([]));
    for (const [name, course] of courses ?? []) {
      if (course.is === "upset") add(`${feed}.${name}.to`, course.to.of([]), course.to.sd?.([]));
    }
  }
  for (const [place, { constants }] of duty.local ?? []) {
    for (const [name, { value }] of constants) add(`${place}.${name}`, value.of([]), value.sd?.([]));
  }
  for (const [place, { temperature, conductance }] of duty.heat?.jackets ?? []) {
    add(`${place}.jacket`, temperature.of([]), temperature.sd?.([]));
    add(`${place}.conductance`, conductance.of([]), conductance.sd?.([]));
  }
  for (const exchanger of duty.heat?.exchangers ?? []) {
    const { value } = exchanger.size;
    add(sizeName(exchanger), value.of([]), value.sd?.([]));
  }
  if (duty.heat && chemistry) {
    add("heat-capacity", heatCapacityOf(chemistry, {}), chemistry.heatCapacity?.sd?.([]));
    const env = envAt(chemistry, duty);
    for (const { text, heat } of chemistry.reactions) {
      if (heat) add(heatName(text), heat.of(env), heat.sd?.(env));
    }
    for (const [feed, { temperature }] of duty.feeds) {
      if (temperature) add(`${feed}.temperature`, temperature.of([]), temperature.sd?.([]));
    }
  }
  if (duty.temperature) add("temperature", duty.temperature.of([]), duty.temperature.sd?.([]));
  return inputs;
}

const fedSpecies = (duty: Duty): string[] => [
  ...new Set([...duty.feeds.values()].flatMap((feed) => [...feed.species.keys()])),
];

/** What is there besides what is fed before a change: at the start, and after it. */
function otherLevels(duty: Duty, species: readonly string[]): Record<"held" | "brought", Float64Array[]> {
  const held = [...(duty.contents?.levels.values() ?? [])].map(({ species: own, temperature }) => {
    const levels = species.map((s) => own.get(s)?.value.of([]) ?? 0);
    return Float64Array.from(duty.heat && temperature ? [...levels, temperature.of([])] : levels);
  });
  const courses = [...duty.feeds.values()].map(({ courses }) =>
    Float64Array.from(species, (s) => {
      const course = courses?.get(s);
      return course?.is === "upset" ? course.to.of([]) : Math.max(0, ...(course?.values ?? []));
    }),
  );
  return { held, brought: courses };
}

/** An Env without species at a duty's constants. */
function envAt(chemistry: Chemistry, duty: Duty): Float64Array {
  const env = new Float64Array(chemistry.temperatureSlot + 1);
  env.set(constantsOf(chemistry, duty), chemistry.species.length);
  return env;
}

/** A trace that is held and grows is measured by what it can come to: at least by this part of what is fed and counted alike. */
const least = 1e-3;

/**
 * Each component by its own largest feed; a species that is not fed by the largest of those that are counted as it is, or by
 * what is held of it at the start.
 */
function scales(
  feeds: readonly Float64Array[],
  held: readonly Float64Array[],
  n: number,
  kinds: readonly Dimension[],
): Float64Array {
  const whole = [...feeds, ...held].reduce((most, feed) => Math.max(most, feed.length), n);
  const largest = (levels: readonly Float64Array[]): Float64Array =>
    Float64Array.from({ length: whole }, (_, i) => Math.max(0, ...levels.map((level) => level[i] ?? 0)));
  const [fed, inside] = [largest(feeds), largest(held)];
  const alike = (i: number, j: number): boolean => {
    const [a, b] = [kinds[i] ?? dimensions.ratio, kinds[j] ?? dimensions.ratio];
    return a.every((x, d) => x === b[d]);
  };
  return fed.map((own, i) => {
    if (own > 0) return Math.max(own, inside[i]);
    const kin = Math.max(0, ...fed.filter((_, j) => j < n && alike(i, j)));
    if (inside[i] > 0) return Math.max(inside[i], least * kin);
    const other = kin > 0 ? kin : Math.max(0, ...inside.filter((_, j) => j < n && alike(i, j)));
    return other > 0 ? other : 1;
  });
}

/** What a duty sets in a network: flows and values by name, as `compile` takes them. SI. */
export function networkSettings(duty: Duty): Record<string, number> {
  const flows = [...duty.flows].map(([feed, { value }]) => [`${feed}.flow`, value.of([])] as const);
  const values = [...duty.settings].map(([name, { value }]) => [name, value.of([])] as const);
  return Object.fromEntries([...flows, ...values]);
}
