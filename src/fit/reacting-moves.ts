import { evaluateNames } from "../compile/evaluate.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { At, Direction } from "./forward.js";
import type { Point } from "./reacting-scene.js";

/** Half width of a central difference along a coordinate, which runs from 0 to 1, and along a fact, in its standard deviations. */
const stepOf = { flask: 1e-5, settled: 1e-4, fact: 1e-2 };

/** How far to move a trial of a reaction along a direction to see what it does; 0 where it does nothing. */
export function stepAlong(network: Network, trial: Trial, { shifted }: At, direction: Direction): number {
  const { names, day, changed } = direction;
  if (changed || day) return stepOf.fact;
  // A flask of its own knows nothing of the names of another vessel.
  const flask = trial.reacting?.vessel;
  const path = trial.reacting?.chemistry.path;
  const moved = [...names.keys()].filter(
    (name) => !flask || network.names.some((n) => n.name === name && n.chemistry?.path === path),
  );
  if (moved.length === 0) return 0;
  return moved.some((n) => shifted.has(n)) ? stepOf.fact : flask ? stepOf.flask : stepOf.settled;
}

/** A point moved along a direction. */
export function movedBy(network: Network, { trial, values }: Point, at: At, direction: Direction, by: number): Point {
  const { names, day, changed } = direction;
  return {
    trial: changed ? changed(trial, by) : trial,
    values: names.size > 0 ? movedNames(network, at, names, by) : values,
    day: new Map([...(day ?? [])].map(([name, slope]) => [name, by * slope])),
  };
}

/** Values with names moved; those that only are shifted from their own expressions follow them. */
function movedNames(
  network: Network,
  { values, shifted }: At,
  names: ReadonlyMap<string, number>,
  by: number,
): Record<string, number> {
  const set: Record<string, number> = {};
  for (const name in values) if (!shifted.has(name)) set[name] = values[name];
  const before = evaluateNames(network, set);
  const slots = new Map(network.names.map((n) => [n.name, n.slot]));
  const own = (env: Float64Array, name: string): number => env[slots.get(name) ?? -1];
  const after = { ...set };
  for (const [name, slope] of names)
    if (!shifted.has(name)) after[name] = (set[name] ?? own(before, name)) + by * slope;
  const env = evaluateNames(network, after);
  for (const name of shifted)
    if (name in values) after[name] = own(env, name) + values[name] - own(before, name) + by * (names.get(name) ?? 0);
  for (const [name, slope] of names)
    if (shifted.has(name) && !(name in values)) after[name] = own(env, name) + by * slope;
  return after;
}
