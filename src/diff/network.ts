import { evaluateNames } from "../compile/evaluate.js";
import type { Check, Compartment, Feed, Named, Network, Requirement } from "../model/network.js";
import type { Value } from "../model/value.js";
import {
  type Change,
  change,
  compareNamed,
  compareStatements,
  lineOf,
  removed,
  type Statement,
  written,
} from "./compare.js";
import type { Difference } from "./difference.js";
import { carriedKeys, exchangesOf, streamKeys, type Translate, valueKey, wordsOf } from "./keys.js";
import { type Matching, matchNames, type Side } from "./match.js";
import { collapseParts } from "./parts.js";
import { carriedWords, places, type Streams, streamWords, type Told, valueWords } from "./words.js";
import { zoneChanges } from "./zones.js";

/** What two networks differ in, in the order of a file, and which of their names are the same. */
export interface NetworkDiff {
  readonly differences: readonly Difference[];
  readonly matching: Matching;
}

/** One side, and how its names are read. */
interface Read extends Side {
  readonly t: Translate;
}

/**
 * What changed in meaning between two networks. Order, layout, spelling of units, notes, and the side that an exchange is
 * written on do not count; a rule and a number that it happens to give do.
 */
export function diffNetworks(before: Network, after: Network): NetworkDiff {
  const sides = [before, after].map((network): Side => ({ network, env: evaluateNames(network) }));
  const matching = matchNames(sides[0], sides[1]);
  const a: Read = { ...sides[0], t: matching.before };
  const b: Read = { ...sides[1], t: matching.after };
  const { places, values } = matching;
  const title: Difference[] =
    before.title === after.title
      ? []
      : [
          {
            what: "changed",
            of: "network",
            name: "",
            ...change("title", before.title, after.title, before.at, after.at),
          },
        ];
  const basis: Difference[] =
    before.basis === after.basis
      ? []
      : [
          {
            what: "changed",
            of: "network",
            name: "",
            ...change("basis", before.basis, after.basis, before.at, after.at),
          },
        ];
  const differences = [
    ...title,
    ...basis,
    ...compareNamed(ownNames(before), ownNames(after), values, {
      of: (n) => n.role,
      say: sayNamed,
      changes: (x, y) => namedChanges(x, y, a, b),
    }),
    ...compareStatements("requirement", requirements(a), requirements(b)),
    ...compareNamed(before.feeds, after.feeds, places, {
      of: () => "feed",
      say: (f) => `${written(f.flow.at)} to ${written(f.toAt)}`,
      changes: (x, y) => [...valueChange("flow", x.flow, y.flow, a, b), ...streamChange(x, y, a, b)],
    }),
    ...compareNamed(before.compartments, after.compartments, places, {
      of: () => "compartment",
      say: sayBody,
      changes: (x, y) => [...bodyChanges(x, y, a, b), ...streamChange(x, y, a, b)],
    }),
    ...exchanges(a, b),
    ...compareNamed(before.outlets, after.outlets, places, { of: () => "outlet", say: () => "", changes: () => [] }),
    ...compareStatements("check", checks(a), checks(b)),
  ];
  return { matching, differences: collapseParts(differences, before, after) };
}

const ownNames = ({ names }: Network): Named[] => names.filter((n) => n.role !== "feed-flow");

const sayNamed = ({ value, between }: Named): string =>
  written(value.at) + (between ? ` between ${written(between[0].at)} and ${written(between[1].at)}` : "");

function namedChanges(x: Named, y: Named, a: Read, b: Read): Change[] {
  const bounds = ({ between }: Named, { env, t }: Read): string =>
    JSON.stringify(between?.map((v) => valueKey(v, env, t)));
  const sayBounds = ({ between }: Named): string =>
    between ? `[${between.map((v) => written(v.at)).join(", ")}]` : "none";
  return [
    ...(x.role === y.role ? [] : [change("role", x.role, y.role, x.at, y.at)]),
    ...valueChange("value", x.value, y.value, a, b),
    ...(bounds(x, a) === bounds(y, b) ? [] : [change("between", sayBounds(x), sayBounds(y), x.at, y.at)]),
    ...(x.spacing === y.spacing ? [] : [change("spacing", x.spacing, y.spacing, x.at, y.at)]),
  ];
}

const valueChange = (key: string, x: Value, y: Value, a: Read, b: Read): Change[] =>
  valueKey(x, a.env, a.t) === valueKey(y, b.env, b.t)
    ? []
    : [change(key, ...valueWords(told(x, a), told(y, b)), x.at, y.at)];

const told = <T>(what: T, { network, env }: Read): Told<T> => ({ what, network, env });

function sayBody(body: Compartment): string {
  const { name, kind, values, streams, sends = [], toAt } = body;
  const keys = [
    ...Object.entries(values).map(([key, v]) => `${key} ${written(v.at)}`),
    ...Object.entries(wordsOf(body)).map(([key, word]) => `${key} ${word}`),
    ...sends.map(({ of }) => `sends ${of} ${carriedWords(streams, of)}`),
  ];
  // What a part's outlet leads to stands in another file than the outlet.
  const to = name.includes(".") ? places(streams) : written(toAt);
  return [kind.name, ...keys, ...(streams.length > 0 ? [`to ${to}`] : [])].join(", ");
}

function bodyChanges(x: Compartment, y: Compartment, a: Read, b: Read): Change[] {
  const kind = x.kind.name === y.kind.name ? [] : [change("kind", x.kind.name, y.kind.name, x.at, y.at)];
  const values = keysOf(x.values, y.values).flatMap((key): Change[] => {
    const [v, w] = [x.values[key], y.values[key]];
    if (v && w) return valueChange(key, v, w, a, b);
    return [change(key, v ? written(v.at) : "none", w ? written(w.at) : "none", v?.at ?? x.at, w?.at ?? y.at)];
  });
  const [p, q] = [wordsOf(x), wordsOf(y)];
  const others = keysOf(p, q).flatMap((key) =>
    p[key] === q[key] ? [] : [change(key, String(p[key] ?? "none"), String(q[key] ?? "none"), x.at, y.at)],
  );
  const tables =
    x.zones && y.zones
      ? zoneChanges({ zones: x.zones, at: x.at, network: a.network }, { zones: y.zones, at: y.at, network: b.network })
      : [];
  return [...kind, ...values, ...others, ...sendsChanges(x, y, a, b), ...tables];
}

/** Substances that divide otherwise than the liquid: the shares of the streams, in any order. */
function sendsChanges(x: Compartment, y: Compartment, a: Read, b: Read): Change[] {
  const ofs = [...new Set([...(x.sends ?? []), ...(y.sends ?? [])].map((s) => s.of))];
  return ofs.flatMap((of): Change[] => {
    const key = ({ streams }: Compartment, { env, t }: Read): string =>
      JSON.stringify([...carriedKeys(streams, of, env, t)].sort());
    if (key(x, a) === key(y, b)) return [];
    const at = (c: Compartment) => c.sends?.find((s) => s.of === of)?.at ?? c.at;
    return [change(`sends ${of}`, carriedWords(x.streams, of), carriedWords(y.streams, of), at(x), at(y))];
  });
}

const keysOf = (x: object, y: object): string[] => [...new Set([...Object.keys(x), ...Object.keys(y)])];

function streamChange(x: Streams | Feed, y: Streams | Feed, a: Read, b: Read): Change[] {
  const key = ({ streams }: Streams, { env, t }: Read): string =>
    JSON.stringify([...streamKeys(streams, env, t)].sort());
  if (key(x, a) === key(y, b)) return [];
  return [change("to", ...streamWords(told(x, a), told(y, b)), x.toAt, y.toAt)];
}

function exchanges(a: Read, b: Read): Difference[] {
  const named = ({ network, t }: Read) =>
    new Map(exchangesOf(network).map((e) => [e.pair.map(t.place).sort().join(" "), e] as const));
  const [before, after] = [named(a), named(b)];
  const here = [...after].flatMap(([key, { pair, exchange: y }]): Difference[] => {
    const x = before.get(key)?.exchange;
    const head = { of: "exchange", name: pair.join(" <> ") };
    if (!x) return [{ what: "added", ...head, after: written(y.flow.at), lineAfter: lineOf(y.at) }];
    return valueChange("flow", x.flow, y.flow, a, b).map((c) => ({ what: "changed", ...head, ...c }));
  });
  const gone = [...before].filter(([key]) => !after.has(key));
  return [
    ...here,
    ...gone.map(([, { pair, exchange }]) =>
      removed("exchange", pair.join(" <> "), written(exchange.flow.at), exchange.at),
    ),
  ];
}

const requirements = ({ network, env, t }: Read): Statement[] =>
  network.requires.map(({ text, at, left, right }: Requirement) => {
    const sides = [valueKey(left, env, t), valueKey(right, env, t)];
    // `a > b` says what `b < a` says.
    const key = text.includes(">") ? sides.reverse() : sides;
    return { key: key.join(/[<>]=/.test(text) ? " <= " : " < "), text, at };
  });

const checks = ({ network, env, t }: Read): Statement[] =>
  network.checks.map(({ what, of, equals, within, at }: Check) => ({
    key: [what, of === "all" ? of : t.place(of), valueKey(equals, env, t), within].join(" "),
    text: `${what} ${of} equals ${written(equals.at)} within ${Number((within * 100).toPrecision(9))} %`,
    at,
  }));
