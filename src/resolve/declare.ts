import type { Named } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, type Tree } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { type Dimension, dimensions } from "../units/dimension.js";
import { checkName } from "./check-name.js";
import { lostParts } from "./lost.js";
import type { Binding, Instance } from "./part.js";

/** A name with a value as some document declares it, before the value is looked at. */
export interface Declared {
  /** With the parts that it lies in: `core.tanks`. */
  readonly name: string;
  /** The same without the numbers of repeats. */
  readonly shared: string;
  /** `inflow`: what streams bring to a feed of a part. */
  readonly role: Named["role"];
  readonly at: Span;
  readonly node: Tree | undefined;
  /** Of the document whose names the value may use. */
  readonly prefix: string;
  readonly wanted: Dimension | "any";
  readonly details: Tree | undefined;
  /** What stands in the part's own file, where a `with:` gives another value. */
  readonly replaces: { readonly node: Tree | undefined; readonly prefix: string } | undefined;
}

/** Constants, parameters and feeds' flows of a document and its parts, a slot for each. */
export function declareNames(instances: readonly Instance[], report: Report): Declared[] {
  const declared: Declared[] = [];
  const used = new Set<Binding>();
  for (const instance of instances) declared.push(...declareIn(instance, used, report));
  const all = new Set<Binding>(instances.flatMap((i) => [...i.bindings.values()]));
  const lost = instances.flatMap((i) => [...lostParts(i)].map((name) => `${i.shared}${name}.`));
  for (const binding of all) {
    const name = `${binding.shared}${binding.part}.${binding.key.text}`;
    if (!used.has(binding) && !lost.some((prefix) => name.startsWith(prefix))) refuseBinding(binding, declared, report);
  }
  return declared;
}

function declareIn({ tree, prefix, shared, bindings }: Instance, used: Set<Binding>, report: Report): Declared[] {
  const declared: Declared[] = [];
  const seen = new Map<string, { at: Span; role: string }>();
  for (const [key, role] of [
    ["constants", "constant"],
    ["parameters", "parameter"],
  ] as const) {
    for (const { key: name, value } of entriesOf(child(tree, key))) {
      if (!checkName(name, report)) continue;
      const earlier = seen.get(name.text);
      if (earlier) {
        const by = `a ${earlier.role}`;
        report("name-taken", name.at, { name: name.text, by }, { at: earlier.at, says: "declared first here" });
        continue;
      }
      seen.set(name.text, { at: name.at, role });
      const details = value.type === "map" ? value : undefined;
      const own = { node: details ? child(value, "value") : value, prefix };
      const binding = bindings.get(shared + name.text);
      if (binding) used.add(binding);
      declared.push({
        name: prefix + name.text,
        shared: shared + name.text,
        // Who gives a value from outside has the say over it: nothing inside is left to move.
        role: binding ? "constant" : role,
        at: binding ? binding.key.at : name.at,
        ...(binding ? { node: binding.value, prefix: binding.prefix, replaces: own } : { ...own, replaces: undefined }),
        wanted: "any",
        details,
      });
    }
  }
  const isPart = prefix !== "";
  for (const { key: name, value } of entriesOf(child(tree, "feeds"))) {
    declared.push({
      name: `${prefix}${name.text}.flow`,
      shared: `${shared}${name.text}.flow`,
      role: isPart ? "inflow" : "feed-flow",
      at: name.at,
      node: isPart ? undefined : child(value, "flow"),
      prefix,
      wanted: dimensions.flow,
      details: undefined,
      replaces: undefined,
    });
  }
  return declared;
}

function refuseBinding({ key, part, shared }: Binding, declared: readonly Declared[], report: Report): void {
  const within = `${shared}${part}.`;
  const inside = declared.filter((d) => d.shared.startsWith(within));
  const unbound = inside.filter((d) => d.role !== "inflow" && !d.replaces);
  const open = [...new Set(unbound.map((d) => d.shared.slice(within.length)))];
  const flow = inside.some((d) => d.role === "inflow" && d.shared === within + key.text);
  report("unknown-binding", key.at, { name: key.text, part, nearest: nearest(key.text, open), known: open, flow });
}
