import type { Named } from "../model/network.js";
import type { Value } from "../model/value.js";
import { collector, type Report } from "../problems/report.js";
import { child, textOf } from "../read/tree.js";
import { type Basis, inBasis } from "../units/basis.js";
import { type Dimension, type DimensionName, dimensions, sameDimension } from "../units/dimension.js";
import { type Declared, declareNames } from "./declare.js";
import { dependencyOrder } from "./dependency-order.js";
import type { Instance } from "./part.js";
import { needsOf, shareNames } from "./shared-names.js";
import { unknownValue } from "./unknown.js";
import { resolveValue, type Scope } from "./value.js";

/** The values of a network that have names, resolved in an order in which each needs only earlier ones. */
export interface ResolvedNames {
  readonly names: readonly Named[];
  /** What else has a slot: the flows into parts, which the streams must tell. */
  readonly inflows: readonly Declared[];
  /** By slot: the slots that each value needs. */
  readonly needs: readonly (readonly number[])[];
  readonly slots: ReadonlyMap<string, number>;
  /** The names that a document may use, as it writes them: those of the document with this prefix. */
  scope(prefix: string): Scope;
}

/** Constants, parameters and flows of feeds, of a document and of all its parts. Broken ones are reported and unknown. */
export function resolveNames(instances: readonly Instance[], report: Report, basis: Basis = "volume"): ResolvedNames {
  const { declared, slots } = shareNames(declareNames(instances, report));
  const found = new Map<number, Dimension>();
  declared.forEach((d, slot) => {
    if (d.role === "inflow") found.set(slot, inBasis(dimensions.flow, basis));
  });
  const values = new Map<number, Value>();
  const wholeName = (name: string): string => declared[slots.get(name) ?? -1]?.name ?? name;
  const scope = (prefix: string): Scope => ({
    basis,
    slot: (name) => slots.get(prefix + name),
    dimension: (name) => found.get(slots.get(prefix + name) ?? -1),
    unit: (name) => values.get(slots.get(prefix + name) ?? -1)?.unit,
    scale: (name) => values.get(slots.get(prefix + name) ?? -1)?.scale,
    names: () => [...slots.keys()].filter((n) => n.startsWith(prefix)).map((n) => n.slice(prefix.length)),
    ...(prefix === "" ? {} : { whole: (name: string) => wholeName(prefix + name) }),
  });
  const needs = needsOf(declared, slots);
  const { order, circles } = dependencyOrder(needs);
  for (const circle of circles) {
    const { node, at } = declared[circle[0]];
    report("circular-names", node?.at ?? at, { circle: circle.map((i) => declared[i].name) });
  }
  for (const slot of order) {
    const { node, prefix, role } = declared[slot];
    const wanted = replacedDimension(declared[slot], scope) ?? declared[slot].wanted;
    const value = role === "inflow" ? undefined : resolveValue(node, wanted, scope(prefix), report);
    if (value) {
      values.set(slot, value);
      found.set(slot, value.dimension);
    } else if (wanted !== "any") found.set(slot, wanted); // so much is known of what has no value
  }
  // Bounds may use any name, so they come when all are known.
  const names = declared.flatMap((d, slot): Named[] => {
    if (d.role === "inflow") return [];
    const { name, role, at } = d;
    const value = values.get(slot);
    if (!value) {
      const unknown = unknownValue(d.node?.at ?? at, found.get(slot));
      return [{ name, slot, role, at, value: unknown, between: undefined, spacing: "linear", about: undefined }];
    }
    sameAsReplaced(d, value, scope, report);
    return [{ name, slot, role, at, value, ...details(d, value, scope(d.prefix), report) }];
  });
  return { names, inflows: declared.filter((d) => d.role === "inflow"), needs, slots, scope };
}

/** How a value measures that a `with:` replaces: what it gives must be alike. Unknown where that needs later names. */
function replacedDimension({ replaces }: Declared, scope: (prefix: string) => Scope): Dimension | undefined {
  return replaces && resolveValue(replaces.node, "any", scope(replaces.prefix), collector().report)?.dimension;
}

/** The same once all names are known. */
function sameAsReplaced(d: Declared, value: Value, scope: (prefix: string) => Scope, report: Report): void {
  const own = replacedDimension(d, scope);
  if (own && !sameDimension(own, value.dimension)) resolveValue(d.node, own, scope(d.prefix), report);
}

function details(
  d: Declared,
  value: Value,
  scope: Scope,
  report: Report,
): Pick<Named, "between" | "spacing" | "about" | "perTrial"> {
  const about = textOf(d.details, "about");
  if (d.replaces) return { between: undefined, spacing: "linear", about };
  const spacing = textOf(d.details, "spacing") === "log" ? "log" : "linear";
  const node = child(d.details, "between");
  let between: [Value, Value] | undefined;
  if (node?.type === "list" && node.items.length === 2) {
    const [low, high] = node.items.map((item) => resolveValue(item, value.dimension, scope, report));
    if (low && high) between = [low, high];
  }
  const perTrial = textOf(d.details, "per") === "trial";
  return { between, spacing, about, ...(perTrial ? { perTrial } : {}) };
}

/** Dimension by its name, or names. */
export const dimensionsOf = (
  name: DimensionName | readonly DimensionName[] | "any",
): Dimension | readonly Dimension[] | "any" =>
  name === "any" ? "any" : typeof name === "string" ? dimensions[name] : name.map((n) => dimensions[n]);
