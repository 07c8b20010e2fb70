import type { Network } from "../model/network.js";
import { exchangesOf, streamKeys, type Translate, valueKey, wordsOf } from "./keys.js";

/** One document of two, with the values of its names. */
export interface Side {
  readonly network: Network;
  readonly env: ArrayLike<number>;
}

/** Which names of the earlier document are which of the later one: earlier name -> later name. */
export interface Matching {
  readonly places: ReadonlyMap<string, string>;
  readonly values: ReadonlyMap<string, string>;
  /** Both sides read in the names of the later document. */
  readonly before: Translate;
  readonly after: Translate;
}

/**
 * Pairs the names of two networks: those that are called the same and are of a sort, then those that differ by nothing
 * but the name (same body, same neighbours, same values), as long as new pairs tell further ones apart.
 */
export function matchNames(a: Side, b: Side): Matching {
  const places = new Map<string, string>();
  const values = new Map<string, string>();
  const known = (pairs: ReadonlyMap<string, string>, name: string): string =>
    [...pairs.values()].includes(name) ? name : "?";
  const before: Translate = { place: (n) => places.get(n) ?? "?", value: (n) => values.get(n) ?? "?" };
  const after: Translate = { place: (n) => known(places, n), value: (n) => known(values, n) };
  pairSame(places, placesOf(a.network), placesOf(b.network));
  pairSame(values, valuesOf(a.network), valuesOf(b.network));
  for (const alike of [false, true]) {
    while (
      pairAlike(places, placeSigns(a, before), placeSigns(b, after), alike) ||
      pairAlike(values, valueSigns(a, before), valueSigns(b, after), alike)
    );
  }
  return { places, values, before: withOwn(before), after: withOwn(after) };
}

/** Names without a counterpart as they are, marked: two of them are never the same. */
const withOwn = (t: Translate): Translate => ({
  place: (n) => (t.place(n) === "?" ? `?${n}` : t.place(n)),
  value: (n) => (t.value(n) === "?" ? `?${n}` : t.value(n)),
});

type Sorts = ReadonlyMap<string, string>;

const placesOf = ({ feeds, compartments, outlets }: Network): Sorts =>
  new Map([
    ...feeds.map((f): [string, string] => [f.name, "feed"]),
    ...compartments.map((c): [string, string] => [c.name, "compartment"]),
    ...outlets.map((o): [string, string] => [o.name, "outlet"]),
  ]);

const valuesOf = ({ names }: Network): Sorts =>
  new Map(names.filter((n) => n.role !== "feed-flow").map((n) => [n.name, "value"]));

function pairSame(pairs: Map<string, string>, a: Sorts, b: Sorts): void {
  for (const [name, sort] of a) if (b.get(name) === sort) pairs.set(name, name);
}

/** Signs by name. */
type Signs = ReadonlyMap<string, string>;

/** Pairs one that has the sign of just one other, or the first of several that are all alike; true where it did. */
function pairAlike(pairs: Map<string, string>, a: Signs, b: Signs, alike: boolean): boolean {
  const taken = new Set(pairs.values());
  const left = [...a].filter(([name]) => !pairs.has(name));
  const right = [...b].filter(([name]) => !taken.has(name));
  for (const [name, sign] of left) {
    const others = right.filter(([, s]) => s === sign);
    const same = left.filter(([, s]) => s === sign);
    if (others.length !== same.length || (others.length !== 1 && !alike)) continue;
    pairs.set(name, others[0][0]);
    return true;
  }
  return false;
}

/** What each place is but for its name: its sort, its values, and what flows in and out. */
function placeSigns({ network, env }: Side, t: Translate): Signs {
  const { feeds, compartments, outlets } = network;
  const into = new Map<string, string[]>();
  for (const from of [...feeds, ...compartments]) {
    for (const [i, key] of [...streamKeys(from.streams, env, t).values()].entries()) {
      const { to } = from.streams[i];
      into.set(to, [...(into.get(to) ?? []), `${t.place(from.name)}:${key}`]);
    }
  }
  const exchanges = exchangesOf(network);
  const around = (name: string): string[] => [
    ...(into.get(name) ?? []).sort(),
    ...exchanges
      .flatMap(({ pair: [x, y], exchange }) =>
        x === name || y === name ? [`<>${t.place(x === name ? y : x)}:${valueKey(exchange.flow, env, t)}`] : [],
      )
      .sort(),
  ];
  const out = (streams: Parameters<typeof streamKeys>[0]): string[] =>
    streams.length === 0 ? [] : [...streamKeys(streams, env, t)].map(([to, key]) => `${to}:${key}`).sort();
  const sign = (parts: readonly unknown[]): string => JSON.stringify(parts);
  return new Map([
    ...feeds.map((f): [string, string] => [
      f.name,
      sign(["feed", valueKey(f.flow, env, t), out(f.streams), around(f.name)]),
    ]),
    ...compartments.map((c): [string, string] => {
      const values = Object.entries(c.values).map(([key, v]) => [key, valueKey(v, env, t)]);
      return [c.name, sign([c.kind.name, values, wordsOf(c), out(c.streams), around(c.name)])];
    }),
    ...outlets.map((o): [string, string] => [o.name, sign(["outlet", around(o.name)])]),
  ]);
}

/** What each constant and parameter is but for its name: its value, bounds, and where it is used. */
function valueSigns({ network, env }: Side, t: Translate): Signs {
  const users = [
    ...network.names.map((n) => ({ user: t.value(n.name), value: n.value })),
    ...network.feeds.map((f) => ({ user: t.place(f.name), value: f.flow })),
    ...network.compartments.flatMap((c) =>
      Object.entries(c.values).map(([key, value]) => ({ user: `${t.place(c.name)}.${key}`, value })),
    ),
    ...exchangesOf(network).map(({ pair, exchange }) => ({ user: pair.map(t.place).join("<>"), value: exchange.flow })),
    ...[...network.feeds, ...network.compartments].flatMap((p) =>
      p.streams.flatMap(({ to, split }) =>
        "value" in split ? [{ user: `${t.place(p.name)}>${t.place(to)}`, value: split.value }] : [],
      ),
    ),
  ];
  return new Map(
    network.names
      .filter((n) => n.role !== "feed-flow")
      .map((n) => {
        const used = users.filter(({ value }) => value.uses.includes(n.name)).map(({ user }) => user);
        const bounds = n.between?.map((b) => valueKey(b, env, t));
        return [n.name, JSON.stringify([n.role, valueKey(n.value, env, t), bounds, n.spacing, used.sort()])];
      }),
  );
}
