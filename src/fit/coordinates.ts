import type { Named, Network } from "../model/network.js";
import type { Env } from "../model/value.js";
import type { Unit } from "../units/unit.js";

/**
 * A free parameter as the search sees it: a number u that runs from 0 to 1 between the parameter's bounds, evenly in the
 * parameter or, with `spacing: log`, in its logarithm. Without bounds u is the parameter over its own size.
 */
export interface Coordinate {
  /** For people: of a parameter with a value in each trial `trial title/name`. */
  readonly name: string;
  readonly named: Named;
  /** The trial that it belongs to, by its index; undefined: all. */
  readonly trial?: number;
  readonly unit: Unit;
  /** Bounds in SI; infinite where the file gives none. */
  readonly lower: number;
  readonly upper: number;
  /** The file's value, SI, inside the bounds. */
  readonly start: number;
  /** u of the bounds. */
  readonly from: number;
  readonly to: number;
  /** Where starts are drawn, in u: the bounds, or an eighth to eight times the file's value. */
  readonly draw: readonly [number, number];
  toSi(u: number): number;
  fromSi(si: number): number;
  /** d SI / d u. */
  slope(u: number): number;
}

/** The coordinate of a parameter. Bounds and value are read at `env`, the values of the file. */
export function coordinateOf(network: Network, named: Named, env: Env): Coordinate {
  const value = env[named.slot];
  const unit = named.value.unit ?? network.units.unitFor(named.value.dimension);
  const base = { name: named.name, named, unit };
  if (!named.between) return { ...base, ...unbounded(value) };
  const a = named.between[0].of(env);
  const b = named.between[1].of(env);
  const [lower, upper] = a <= b ? [a, b] : [b, a];
  const start = Math.min(upper, Math.max(lower, value));
  const scale = named.spacing === "log" && lower > 0 ? logarithmic(lower, upper) : linear(lower, upper);
  return { ...base, ...scale, lower, upper, start, from: 0, to: 1, draw: [0, 1] };
}

type Scale = Pick<Coordinate, "toSi" | "fromSi" | "slope">;

function linear(lower: number, upper: number): Scale {
  const width = upper - lower || 1;
  return {
    toSi: (u) => (u >= 1 ? lower + width : lower + u * width),
    fromSi: (si) => (si - lower) / width,
    slope: () => width,
  };
}

function logarithmic(lower: number, upper: number): Scale {
  const width = Math.log(upper / lower) || 1;
  return {
    toSi: (u) => (u <= 0 ? lower : u >= 1 ? upper : lower * Math.exp(u * width)),
    fromSi: (si) => Math.log(si / lower) / width,
    slope: (u) => lower * Math.exp(u * width) * width,
  };
}

function unbounded(value: number): Omit<Coordinate, "name" | "named" | "unit"> {
  const size = Math.abs(value) || 1;
  const s = Math.sign(value);
  return {
    lower: -Infinity,
    upper: Infinity,
    start: value,
    from: -Infinity,
    to: Infinity,
    draw: s > 0 ? [1 / 8, 8] : s < 0 ? [-8, -1 / 8] : [-1, 1],
    toSi: (u) => u * size,
    fromSi: (si) => si / size,
    slope: () => size,
  };
}
