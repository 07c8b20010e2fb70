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
  const [places, values] = [new Pairs(), new Pairs()];
  const before: Translate = { place: (n) => places.later(n) ?? "?", value: (n) => values.later(n) ?? "?" };
  const after: Translate = {
    place: (n) => (places.isTaken(n) ? n : "?"),
    value: (n) => (values.isTaken(n) ? n : "?"),
  };
  pairSame(places, placesOf(a.network), placesOf(b.network));
  pairSame(values, valuesOf(a.network), valuesOf(b.network));
  for (const alike of [false, true]) {
    while (
      pairAlike(places, placeSigns(a, before), placeSigns(b, after), alike) ||
      pairAlike(values, valueSigns(a, before), valueSigns(b, after), alike)
    );
  }
  return { places: places.all, values: values.all, before: withOwn(before), after: withOwn(after) };
}

/** Names of two sides, paired. */
class Pairs {
  readonly all = new Map<string, string>();
  private readonly taken = new Set<string>();

  add(earlier: string, later: string): void {
    this.all.set(earlier, later);
    this.taken.add(later);
  }

  later(earlier: string): string | undefined {
    return this.all.get(earlier);
  }

  isTaken(later: string): boolean {
    return this.taken.has(later);
  }
}

/** Names without a counterpart as they are, marked: two of them are never the same. */
const withOwn = (t: Translate): Translate => ({
  place: (n) => {
    if (t.place(n) !== "?") return t.place(n);
    // What lies within a body, such as a member of a repeat, goes by the name of the body.
    const dot = n.lastIndexOf(".");
    const owner = dot < 0 ? "?" : t.place(n.slice(0, dot));
    return owner === "?" ? `?${n}` : owner + n.slice(dot);
  },
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

function pairSame(pairs: Pairs, a: Sorts, b: Sorts): void {
  for (const [name, sort] of a) if (b.get(name) === sort) pairs.add(name, name);
}

/** Signs by name. */
type Signs = ReadonlyMap<string, string>;

/** Pairs those that have the sign of just one other, or one of several that are all alike; true where it did. */
function pairAlike(pairs: Pairs, a: Signs, b: Signs, alike: boolean): boolean {
  const left = bySign(a, (name) => pairs.later(name) === undefined);
  const right = bySign(b, (name) => !pairs.isTaken(name));
  let found = false;
  for (const [sign, [name, ...twins]] of left) {
    const [other, ...others] = right.get(sign) ?? [];
    if (other === undefined || others.length !== twins.length || (twins.length > 0 && !alike)) continue;
    pairs.add(name, other);
    found = true;
    // Of twins one pair at a time: it may tell the others apart.
    if (twins.length > 0) break;
  }
  return found;
}

function bySign(signs: Signs, isOpen: (name: string) => boolean): Map<string, string[]> {
  const groups = new Map<string, string[]>();
  for (const [name, sign] of signs) {
    if (isOpen(name)) groups.set(sign, [...(groups.get(sign) ?? []), name]);
  }
  return groups;
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
