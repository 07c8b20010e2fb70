import type { Network, Stream } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Span } from "../text/source.js";
import { formatQuantity } from "../units/format.js";
import { written } from "./compare.js";

/** A value of one of two documents, with what it needs to be told. */
export interface Told<T> {
  readonly what: T;
  readonly network: Network;
  readonly env: ArrayLike<number>;
}

/** Two values as written; where that is the same, what they come to, or what their names stand for. */
export function valueWords(a: Told<Value>, b: Told<Value>): [string, string] {
  return firstUnlike(a, b, [
    ({ what }) => written(what.at),
    ({ what, network, env }) => {
      const unit = what.unit ?? network.units.unitFor(what.dimension);
      return `${written(what.at)} = ${formatQuantity(what.of(env), unit, 6)}`;
    },
    ({ what }) => `${written(what.at)} by ${what.uses.join(", ")}`,
  ]);
}

/** Where streams go, as written; where that is the same, by the whole names of the places. */
export function streamWords(a: Told<Streams>, b: Told<Streams>): [string, string] {
  return firstUnlike(a, b, [
    ({ what: { streams, toAt } }) => (streams.length > 0 ? written(toAt) : "none"),
    ({ what: { streams } }) => (streams.length > 0 ? places(streams) : "none"),
  ]);
}

export interface Streams {
  readonly streams: readonly Stream[];
  readonly toAt: Span;
}

const end = ({ to, enters }: Stream): string => (enters === undefined ? to : `${to}.${enters}`);

/** By the whole names of the places: `out`, `{core.feed: 30 %, out: rest}`. */
export function places(streams: readonly Stream[]): string {
  if (streams.length === 1 && streams[0].split.is === "all") return end(streams[0]);
  const share = ({ split }: Stream): string => ("value" in split ? written(split.value.at) : split.is);
  return `{${streams.map((s) => `${end(s)}: ${share(s)}`).join(", ")}}`;
}

/** The shares of a substance as written: `{sludge: 98 %, effluent: rest}`. */
export function carriedWords(streams: readonly Stream[], of: string): string {
  const parts = streams.flatMap((s) => {
    const part = s.carries?.get(of);
    return part === undefined ? [] : [`${end(s)}: ${part === "rest" ? part : written(part.at)}`];
  });
  return parts.length > 0 ? `{${parts.join(", ")}}` : "as the liquid";
}

function firstUnlike<T>(a: Told<T>, b: Told<T>, ways: readonly ((told: Told<T>) => string)[]): [string, string] {
  const said = ways.map((say): [string, string] => [say(a), say(b)]);
  return said.find(([x, y]) => x !== y) ?? said[0];
}
