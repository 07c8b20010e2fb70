import { Part, type Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { type Conditions, conditionsOf, type DutySettings } from "./conditions.js";
import { dispersedProfile } from "./dispersion-profile.js";
import type { Kinetics } from "./kinetics.js";
import type { SteadyState } from "./steady.js";
import { passTube } from "./tube.js";
import { alongWay } from "./way.js";

/** What the liquid is like along a body that it flows through: a tube, or one with axial dispersion. */
export interface Profile {
  /** The compartment, or the member of a row (`chain.2`). */
  readonly name: string;
  /** Shares of the body's volume passed, from 0 (just inside) to 1. */
  readonly passed: Float64Array;
  /** By species, SI. */
  readonly concentrations: readonly Float64Array[];
  /** K, where heat is balanced. */
  readonly temperature: Float64Array | undefined;
}

/**
 * Concentrations and temperature along every tubular and dispersed body of a settled plant. Bodies that are mixed
 * throughout, or whose parcels stay by themselves for times of their own, have no such line.
 * @param state the steady state of the same plant, chemistry, duty and settings
 * @param pieces equal shares of the volume between places
 */
export function profilesAlong(
  plant: Plant,
  chemistry: Chemistry | undefined,
  duty: Duty,
  state: SteadyState,
  settings: DutySettings = {},
  pieces = 60,
): Profile[] {
  const conditions = conditionsOf(plant, chemistry, duty, settings);
  const { columns } = plant;
  const passed = Float64Array.from({ length: pieces + 1 }, (_, k) => k / pieces);
  const profiles: Profile[] = [];
  for (let node = 0; node < columns.size; node++) {
    if (!(columns.inflow[node] > 0)) continue;
    const states = alongNode(plant, node, conditions, enteringMixture(plant, node, state, conditions), passed);
    if (states) profiles.push(profile(columns.nameOf(node), passed, states, conditions));
  }
  return profiles;
}

/** The mixture at each place, scaled; undefined where the node is no such body, or it cannot be followed. */
function alongNode(
  { columns }: Plant,
  node: number,
  { reactionsAt }: Conditions,
  entering: Float64Array,
  passed: Float64Array,
): readonly Float64Array[] | undefined {
  const { part, volume, inflow } = columns;
  const reactions = reactionsAt(node);
  if (part[node] === Part.Delay) {
    if (volume[node] === 0) return undefined;
    return alongTube(alongWay(reactions, volume[node], undefined, inflow[node]), entering, passed);
  }
  const block = columns.blockAt(node);
  if (!block || block.mixing.is === "segregated" || block.volume === 0) return undefined;
  if (block.mixing.is === "plug") {
    return alongTube(alongWay(reactions, block.volume, block.pockets, inflow[node]), entering, passed);
  }
  const way = alongWay(reactions, block.volume, block.pockets, inflow[node], reactions.cell);
  return dispersedProfile(way, block.mixing.peclet, entering, passed);
}

/** A parcel, looked at on its way. */
function alongTube(
  kinetics: Kinetics,
  entering: Float64Array,
  passed: Float64Array,
): readonly Float64Array[] | undefined {
  const states = [entering];
  for (let k = 1; k < passed.length; k++) {
    const y = states[k - 1].slice();
    if (!passTube(kinetics, passed[k] - passed[k - 1], y)) return undefined;
    states.push(y);
  }
  return states;
}

/** What enters a node from its neighbours and feeds, in the scaled components of mixtures. */
function enteringMixture(plant: Plant, node: number, state: SteadyState, conditions: Conditions): Float64Array {
  const { size, scale, species, feeds } = conditions;
  const n = species.length;
  const mixed = new Float64Array(size);
  const add = (flow: number, of: (i: number) => number): void => {
    for (let i = 0; i < size; i++) mixed[i] += (flow * of(i)) / (scale[i] * plant.columns.inflow[node]);
  };
  for (let link = 0; link < plant.to.length; link++) {
    if (plant.to[link] !== node || !(plant.flow[link] > 0)) continue;
    const from = plant.from[link];
    add(plant.flow[link], (i) => (i < n ? state.concentrations[from * n + i] : (state.temperatures?.[from] ?? 0)));
  }
  plant.feeds.forEach((feed, k) => {
    if (feed.node === node) add(feed.flow, (i) => feeds[k][i]);
  });
  return mixed;
}

function profile(
  name: string,
  passed: Float64Array,
  states: readonly Float64Array[],
  { species, scale, heat }: Conditions,
): Profile {
  const component = (i: number): Float64Array => Float64Array.from(states, (y) => y[i] * scale[i]);
  return {
    name,
    passed,
    concentrations: species.map((_, i) => component(i)),
    temperature: heat && component(species.length),
  };
}
