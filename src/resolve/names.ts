import { namesIn } from "../expressions/ast.js";
import { isFault } from "../expressions/fault.js";
import { parseValue } from "../expressions/parse.js";
import { reservedNames } from "../expressions/reserved.js";
import type { Named } from "../model/network.js";
import type { Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { child, entriesOf, type MapNode, type ScalarNode, type Tree, textOf } from "../read/tree.js";
import type { Span } from "../text/source.js";
import { type Dimension, type DimensionName, dimensions } from "../units/dimension.js";
import { dependencyOrder } from "./dependency-order.js";
import { resolveValue, type Scope } from "./value.js";

/** Reports a name that breaks the rules; true where it is fine. */
export function checkName(key: ScalarNode, report: Report): boolean {
  if (reservedNames.has(key.text)) report("reserved-name", key.at, { name: key.text });
  else if (!/^[A-Za-z][A-Za-z0-9_-]*$/.test(key.text)) report("bad-name", key.at, { name: key.text });
  else return true;
  return false;
}

interface Declared {
  readonly name: string;
  readonly role: Named["role"];
  readonly at: Span;
  readonly node: Tree | undefined;
  readonly wanted: Dimension | "any";
  readonly details: Tree | undefined;
}

/** The values of a network that have names, resolved in an order in which each needs only earlier ones. */
export interface ResolvedNames {
  readonly names: readonly Named[];
  readonly order: readonly number[];
  readonly scope: Scope;
  readonly slots: ReadonlyMap<string, number>;
}

/** Constants, parameters and `feed.flow`s. Broken ones are reported and left out of `order`. */
export function resolveNames(tree: MapNode, report: Report): ResolvedNames {
  const declared = declare(tree, report);
  const slots = new Map(declared.map((d, i) => [d.name, i]));
  const found = new Map<string, Dimension>();
  const scope: Scope = {
    slot: (name) => slots.get(name),
    dimension: (name) => found.get(name),
    names: () => [...slots.keys()],
  };
  const names: Named[] = [];
  const order: number[] = [];
  const needs = declared.map((d) => namesUsed(d.node).flatMap((n) => slots.get(n) ?? []));
  const { order: possible, circles } = dependencyOrder(needs);
  for (const circle of circles) {
    const { node, at } = declared[circle[0]];
    report("circular-names", node?.at ?? at, { circle: circle.map((i) => declared[i].name) });
  }
  const values = new Map<number, Value>();
  for (const slot of possible) {
    const value = resolveValue(declared[slot].node, declared[slot].wanted, scope, report);
    if (!value) continue;
    values.set(slot, value);
    found.set(declared[slot].name, value.dimension);
    order.push(slot);
  }
  // Bounds may use any name, so they come when all are known.
  declared.forEach((d, slot) => {
    const value = values.get(slot);
    if (value) names.push({ name: d.name, slot, role: d.role, at: d.at, value, ...details(d, value, scope, report) });
  });
  return { names, order, scope, slots };
}

function declare(tree: MapNode, report: Report): Declared[] {
  const declared: Declared[] = [];
  const seen = new Map<string, Declared>();
  for (const [key, role] of [
    ["constants", "constant"],
    ["parameters", "parameter"],
  ] as const) {
    for (const { key: name, value } of entriesOf(child(tree, key))) {
      if (!checkName(name, report)) continue;
      const earlier = seen.get(name.text);
      if (earlier) {
        report(
          "name-taken",
          name.at,
          { name: name.text, by: `a ${earlier.role}` },
          { at: earlier.at, says: "declared first here" },
        );
        continue;
      }
      const node = value.type === "map" ? child(value, "value") : value;
      const entry: Declared = {
        name: name.text,
        role,
        at: name.at,
        node,
        wanted: "any",
        details: value.type === "map" ? value : undefined,
      };
      seen.set(name.text, entry);
      declared.push(entry);
    }
  }
  for (const { key: name, value } of entriesOf(child(tree, "feeds"))) {
    declared.push({
      name: `${name.text}.flow`,
      role: "feed-flow",
      at: name.at,
      node: child(value, "flow"),
      wanted: dimensions.flow,
      details: undefined,
    });
  }
  return declared;
}

function details(
  d: Declared,
  value: Value,
  scope: Scope,
  report: Report,
): Pick<Named, "between" | "spacing" | "about"> {
  const spacing = textOf(d.details, "spacing") === "log" ? "log" : "linear";
  const about = textOf(d.details, "about");
  const node = child(d.details, "between");
  let between: [Value, Value] | undefined;
  if (node?.type === "list") {
    const [low, high] = node.items.map((item) => resolveValue(item, value.dimension, scope, report));
    if (low && high) between = [low, high];
  }
  return { between, spacing, about };
}

function namesUsed(node: Tree | undefined): readonly string[] {
  if (node?.type !== "scalar") return [];
  const written = parseValue(node.text);
  return isFault(written) ? [] : namesIn(written.expression);
}

/** Dimension by its name, or names. */
export const dimensionsOf = (
  name: DimensionName | readonly DimensionName[] | "any",
): Dimension | readonly Dimension[] | "any" =>
  name === "any" ? "any" : typeof name === "string" ? dimensions[name] : name.map((n) => dimensions[n]);
