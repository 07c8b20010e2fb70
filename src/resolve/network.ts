import type { Compartment, Feed, Network } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { child, type MapNode, textOf } from "../read/tree.js";
import { resolveChecks } from "./checks.js";
import { dependencyOrder } from "./dependency-order.js";
import { inflowsOf } from "./inflow.js";
import { type LocalNetwork, resolveLocal } from "./local.js";
import { resolveNames } from "./names.js";
import { allInstances, basisOf, type Instance, openParts } from "./part.js";
import { placeAll } from "./place.js";
import { resolveRequirements } from "./requirements.js";
import { unitBook } from "./unit-book.js";

/**
 * Binds every name and value of a network document and of the parts in it. Problems go to `report`; what could not be
 * bound is left out, so the result is to be used further only where no error was reported.
 * @param tree a document that has passed the shape check
 */
export function resolveNetwork(tree: MapNode, path: string, report: Report, files: Files = noFiles): Network {
  const root = openParts(tree, files, report);
  const basis = basisOf(tree);
  const instances = allInstances(root);
  const { names: declared, inflows, needs, slots, scope } = resolveNames(instances, report, basis);
  const env = valuesOfNames(declared, dependencyOrder(needs).order);
  const locals = new Map<Instance, LocalNetwork>();
  for (const instance of instances) {
    const flows = declared.filter((n) => n.role === "feed-flow" && instance === root);
    locals.set(instance, resolveLocal(instance, flows, scope(instance.prefix), env, files, report));
  }
  const { feeds, compartments, outlets, groups } = placeAll(root, locals);
  const requires = instances.map((i) => resolveRequirements(child(i.tree, "requires"), scope(i.prefix), report));
  const { checks, checkNames } = resolveChecks(child(tree, "checks"), scope(""), report);
  const values = valuesOf(
    feeds,
    declared.map((n) => n.value),
    compartments,
  );
  const bySlot = new Map(declared.map((n) => [n.slot, n]));
  const used = new Set([
    // What stands in a value that is none is used all the same.
    ...declared.flatMap((n) => (n.value.unknown ? needs[n.slot].flatMap((slot) => bySlot.get(slot)?.name ?? []) : [])),
    ...[...values, ...declared.flatMap((n) => n.between ?? [])].flatMap((v) => v.uses),
    ...requires.flatMap((r) => r.requireNames),
    ...checkNames,
  ]);
  const wanted = inflows.filter((d) => used.has(d.name));
  const found = inflowsOf(wanted, { feeds, compartments, groups }, slots, needs, basis, report);
  const names = [...declared, ...found.names];
  const known = new Set(names.map((n) => n.slot));
  return {
    title: textOf(tree, "network") ?? "",
    at: child(tree, "network")?.at ?? tree.at,
    path,
    notes: textOf(tree, "notes"),
    basis,
    names,
    order: found.order.filter((slot) => known.has(slot)),
    feeds,
    compartments,
    outlets,
    groups,
    requires: requires.flatMap((r) => r.requires),
    checks,
    used,
    units: unitBook([...values, ...compartments.flatMap((c) => c.zones?.units ?? [])], feeds[0]?.flow, basis),
  };
}

const noFiles: Files = { read: () => undefined };

/** At the file's own values. */
function valuesOfNames(names: Network["names"], order: readonly number[]): Float64Array {
  const env = new Float64Array(names.reduce((size, n) => Math.max(size, n.slot + 1), 0));
  const bySlot = new Map(names.map((n) => [n.slot, n]));
  for (const slot of order) env[slot] = bySlot.get(slot)?.value.of(env) ?? Number.NaN;
  return env;
}

/** All values in file order of their sections: the first unit of a dimension is the one to print in. */
function valuesOf(feeds: readonly Feed[], named: readonly Value[], compartments: readonly Compartment[]): Value[] {
  const streams = [...feeds, ...compartments].flatMap((n) => n.streams);
  return [
    ...named,
    ...compartments.flatMap((c) => Object.values(c.values)),
    ...compartments.flatMap((c) => c.exchanges.map((e) => e.flow)),
    ...streams.flatMap((s) => ("value" in s.split ? [s.split.value] : [])),
    ...streams.flatMap((s) => [...(s.carries?.values() ?? [])].flatMap((v) => (v === "rest" ? [] : [v]))),
  ];
}
