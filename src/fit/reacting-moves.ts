import { evaluateNames } from "../compile/evaluate.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { At, Direction } from "./forward.js";
import type { Point } from "./reacting-scene.js";

/**
 * Half width of a central difference along a coordinate, which runs from 0 to 1, and along a fact, in its standard deviations: of
 * right-hand sides, which are exact, of steady states (to 1e-11), of courses in time (to 1e-8).
 */
export const steps = {
  flask: { coordinate: 1e-5, fact: 1e-2 },
  settled: { coordinate: 1e-4, fact: 1e-2 },
  inTime: { coordinate: 1e-3, fact: 0.1 },
} as const;

/** How far to move a trial of a reaction along a direction to see what it does; 0 where it does nothing. */
export function stepAlong(
  network: Network,
  trial: Trial,
  { shifted }: At,
  { names, day, changed }: Direction,
  { coordinate, fact }: (typeof steps)[keyof typeof steps],
): number {
  if (changed || day) return fact;
  // A flask of its own knows nothing of the names of another vessel.
  const flask = trial.reacting?.vessel;
  const path = trial.reacting?.chemistry.path;
  const moved = [...names.keys()].filter(
    (name) => !flask || network.names.some((n) => n.name === name && n.chemistry?.path === path),
  );
  if (moved.length === 0) return 0;
  return moved.some((n) => shifted.has(n)) ? fact : coordinate;
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
