import { evaluateNames } from "../compile/evaluate.js";
import type { Settings } from "../compile/plant.js";
import type { Network } from "../model/network.js";
import type { Trial } from "../model/trial.js";
import type { At, Direction, Sloped, WantedTimes } from "./forward.js";

/** Curves of a trial at values of names; `day`: by how much what the day set is moved, by name, SI. */
export type Respond = (
  trial: Trial,
  values: Settings,
  wanted: WantedTimes,
  day: ReadonlyMap<string, number>,
) => Float64Array[] | undefined;

/** Step of the central differences along a coordinate, which runs from 0 to 1, and along a fact, in its standard deviations. */
const stepOf = { coordinate: 1e-5, fact: 1e-2 };

/** Derivatives along directions by central differences; curves are exact to about 1e-10, so that slopes are to about 1e-6. */
export function slopesBy(
  respond: Respond,
  network: Network,
  trial: Trial,
  at: At,
  wanted: WantedTimes,
  directions: readonly Direction[],
): Sloped | undefined {
  const curves = respond(trial, at.values, wanted, new Map());
  if (!curves) return undefined;
  const moved = ({ names, day, changed }: Direction, by: number): Float64Array[] | undefined =>
    respond(
      changed ? changed(trial, by) : trial,
      names.size > 0 ? movedNames(network, at, names, by) : at.values,
      wanted,
      new Map([...(day ?? [])].map(([name, slope]) => [name, by * slope])),
    );
  const still = curves.map((c) => new Float64Array(c.length));
  const slopes = directions.map((direction) => {
    if (direction.names.size === 0 && !direction.day && !direction.changed) return still;
    const isFact = direction.day || direction.changed || [...direction.names.keys()].some((n) => at.shifted.has(n));
    const step = isFact ? stepOf.fact : stepOf.coordinate;
    const [above, below] = [moved(direction, step), moved(direction, -step)];
    return above && below && above.map((a, r) => a.map((v, i) => (v - below[r][i]) / (2 * step)));
  });
  return { curves, slopes };
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
