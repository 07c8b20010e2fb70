import type { Group, Network } from "../model/network.js";
import { lineOf } from "./compare.js";
import type { Difference } from "./difference.js";

/** Parts that are new or gone as a whole, each on one line in place of one for every body and value in it. */
export function collapseParts(
  differences: readonly Difference[],
  before: Network,
  after: Network,
): readonly Difference[] {
  return collapse(collapse(differences, "removed", before), "added", after);
}

function collapse(
  differences: readonly Difference[],
  what: "added" | "removed",
  { groups }: Network,
): readonly Difference[] {
  const alone = new Set(differences.flatMap((d) => (d.what === what && d.of === "compartment" ? [d.name] : [])));
  const whole = groups.filter((g) => g.members.length > 0 && g.members.every((m) => alone.has(m)));
  const outer = whole.filter((g) => !whole.some((other) => isIn(g.name, other)));
  const told = new Set<Group>();
  return differences.flatMap((d): Difference[] => {
    const group = d.what === what ? outer.find((g) => d.name.split(" <> ").every((n) => isIn(n, g))) : undefined;
    if (!group) return [d];
    if (told.has(group)) return [];
    told.add(group);
    return [said(group, what)];
  });
}

const isIn = (name: string, group: Group): boolean => name.startsWith(`${group.name}.`);

function said({ name, title, path, members, at }: Group, what: "added" | "removed"): Difference {
  const text = `${title}, ${path}, ${members.length} ${members.length === 1 ? "body" : "bodies"} with its ports`;
  return what === "added"
    ? { what, of: "part", name, after: text, lineAfter: lineOf(at) }
    : { what, of: "part", name, before: text, lineBefore: lineOf(at) };
}
