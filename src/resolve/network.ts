import { kinds } from "../compartments/index.js";
import type { Compartment, Feed, Network, Outlet } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, itemsOf, type MapNode, type Tree, textOf } from "../read/tree.js";
import type { KeyShape } from "../schema/shape.js";
import { resolveChecks } from "./checks.js";
import { checkName, dimensionsOf, resolveNames } from "./names.js";
import { resolveRequirements } from "./requirements.js";
import { resolveExchanges, resolveStreams } from "./streams.js";
import { unitBook } from "./unit-book.js";
import { resolveValue, type Scope } from "./value.js";

/**
 * Binds every name and value of a network document. Problems go to `report`; what could not be bound is left out, so
 * the result is to be used further only where no error was reported.
 * @param tree a document that has passed the shape check
 */
export function resolveNetwork(tree: MapNode, path: string, report: Report): Network {
  const { names, order, scope } = resolveNames(tree, report);
  const feeds = entriesOf(child(tree, "feeds")).flatMap(({ key, value }): Feed[] => {
    checkName(key, report);
    const named = names.find((n) => n.role === "feed-flow" && n.name === `${key.text}.flow`);
    const streams = resolveStreams(child(value, "to"), scope, report);
    if (!named) return [];
    const toAt = child(value, "to")?.at ?? key.at;
    return [{ name: key.text, at: key.at, flow: named.value, flowSlot: named.slot, streams, toAt }];
  });
  const compartments = entriesOf(child(tree, "compartments")).flatMap(({ key, value }) => {
    checkName(key, report);
    return value.type === "map" ? (resolveCompartment(key.text, key.at, value, scope, report) ?? []) : [];
  });
  const outlets = itemsOf(child(tree, "outlets")).flatMap((item): Outlet[] => {
    if (item.type !== "scalar") return [];
    checkName(item, report);
    return [{ name: item.text, at: item.at }];
  });
  const { requires, requireNames } = resolveRequirements(child(tree, "requires"), scope, report);
  const { checks, checkNames } = resolveChecks(child(tree, "checks"), scope, report);
  const title = child(tree, "network");
  const values = valuesOf(
    feeds,
    names.map((n) => n.value),
    compartments,
  );
  return {
    title: textOf(tree, "network") ?? "",
    at: title?.at ?? tree.at,
    path,
    notes: textOf(tree, "notes"),
    names,
    order,
    feeds,
    compartments,
    outlets,
    requires,
    checks,
    used: new Set(
      [...values, ...names.flatMap((n) => n.between ?? [])].flatMap((v) => v.uses).concat(requireNames, checkNames),
    ),
    units: unitBook(values, feeds[0]?.flow),
  };
}

function resolveCompartment(
  name: string,
  at: Compartment["at"],
  node: MapNode,
  scope: Scope,
  report: Report,
): Compartment | undefined {
  const kindName = textOf(node, "kind") ?? "";
  const kind = Object.hasOwn(kinds, kindName) ? kinds[kindName] : undefined;
  if (!kind) return undefined; // the shape check has said so
  return {
    name,
    at,
    kind,
    ...resolveKeys(kind.keys, node, scope, report),
    streams: resolveStreams(child(node, "to"), scope, report),
    exchanges: resolveExchanges(child(node, "exchange"), scope, report),
    toAt: child(node, "to")?.at ?? at,
  };
}

type Keys = Pick<Compartment, "values" | "counts" | "words">;

/** The keys of a kind by their declaration; those inside a key are named by both. */
function resolveKeys(
  keys: Readonly<Record<string, KeyShape>>,
  node: Tree | undefined,
  scope: Scope,
  report: Report,
  within = "",
): Keys {
  const values: Record<string, Value> = {};
  const counts: Record<string, number> = {};
  const words: Record<string, string> = {};
  for (const [key, { shape }] of Object.entries(keys)) {
    const written = child(node, key);
    if (!written) continue;
    const name = within + key;
    if (shape.is === "quantity") {
      const value = resolveValue(written, dimensionsOf(shape.dimension), scope, report);
      if (value) values[name] = value;
    } else if (shape.is === "record") {
      const inside = resolveKeys(shape.keys, written, scope, report, `${name}.`);
      Object.assign(values, inside.values);
      Object.assign(counts, inside.counts);
      Object.assign(words, inside.words);
    } else if (shape.is === "whole" && written.type === "scalar") counts[name] = Number(written.text);
    else if (shape.is === "choice" && written.type === "scalar") words[name] = written.text;
  }
  return { values, counts, words };
}

/** All values in file order of their sections: the first unit of a dimension is the one to print in. */
function valuesOf(feeds: readonly Feed[], named: readonly Value[], compartments: readonly Compartment[]): Value[] {
  const streams = [...feeds, ...compartments].flatMap((n) => n.streams);
  return [
    ...named,
    ...compartments.flatMap((c) => Object.values(c.values)),
    ...compartments.flatMap((c) => c.exchanges.map((e) => e.flow)),
    ...streams.flatMap((s) => ("value" in s.split ? [s.split.value] : [])),
  ];
}
