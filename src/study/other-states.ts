import { type Figure, figuresOf } from "../reaction/figures.js";
import { steadyStates } from "../reaction/states.js";
import type { SteadyState } from "../reaction/steady.js";
import { dutySettings, type Operation, plantOf, type Row } from "./operate.js";

/** A steady state of an operation, by what it reports. */
export interface StateFigures {
  readonly figures: readonly Figure[];
  readonly stable: boolean | undefined;
  /** Unstable, and swinging away: with no other state to run to, the vessel swings about it for good. */
  readonly swings: boolean;
  /** Species of which it holds as good as nothing while another state found at the same point holds some. */
  readonly without: readonly string[];
  /** Is it the one whose figures are reported: that a vessel filled with what is fed runs to? */
  readonly reached: boolean;
}

/** What a search for further steady states found at one point. */
export interface OtherStates {
  /** Values of what moves, SI; none where nothing does. */
  readonly at: readonly number[];
  readonly states: readonly StateFigures[];
  /** What was not searched, in words. */
  readonly left: readonly string[];
}

/** Nodes up to which an operation is searched. */
const mostSearched = 100;

/**
 * All steady states that a search finds at one point, where heat or rates that bend make several possible.
 * @returns undefined where there is nothing to tell: one state, and nothing against it
 */
export function otherStates(operation: Operation, row: Row, at: readonly number[] = []): OtherStates | undefined {
  const { duty } = operation;
  const { plant } = plantOf(operation, row);
  if (!plant || !duty.chemistry) return undefined;
  if (plant.columns.size > mostSearched) {
    return duty.heat ? { at, states: [], left: ["the network has too many nodes"] } : undefined;
  }
  const settings = dutySettings(duty, row);
  const { states, left } = steadyStates(plant, duty.chemistry, duty, settings);
  const found = states.map(({ state, stable, mode, reached }) => ({
    figures: figuresOf(plant, duty, state, settings),
    stable,
    swings: stable === false && mode !== undefined && mode.swing > 0,
    without: state.species.filter((_, i) => {
      const most = states.reduce((sum, other) => Math.max(sum, largest(other.state, i)), 0);
      return largest(state, i) < absent * most;
    }),
    reached,
  }));
  const doubtful = found.length > 1 || found.some((s) => s.reached && s.stable === false);
  if (!doubtful && !(duty.heat && left.length > 0)) return undefined;
  return { at, states: found, left };
}

/** Part of what another state holds of a species that is as good as nothing. */
const absent = 1e-9;

/** The largest concentration of a species in a plant, SI. */
function largest({ species, concentrations }: SteadyState, i: number): number {
  let most = 0;
  for (let k = i; k < concentrations.length; k += species.length)
    if (concentrations[k] > most) most = concentrations[k];
  return most;
}

/** Does the vessel swing for good, for it has no stable state that was found? */
export const onlySwings = ({ states }: OtherStates): boolean =>
  states.every((s) => s.stable === false) && states.some((s) => s.reached && s.swings);

/** Every so many of a list that at most `most` remain, first and last among them. */
export function someOf<T>(list: readonly T[], most: number): T[] {
  if (list.length <= most) return [...list];
  return Array.from({ length: most }, (_, k) => list[Math.round((k * (list.length - 1)) / (most - 1))]);
}
