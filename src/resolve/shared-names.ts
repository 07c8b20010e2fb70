import { namesIn } from "../expressions/ast.js";
import { isFault } from "../expressions/fault.js";
import { parseValue } from "../expressions/parse.js";
import type { Tree } from "../read/tree.js";
import type { Declared } from "./declare.js";

/** By slot: the slots of the names that each value uses. */
export const needsOf = (declared: readonly Declared[], slots: ReadonlyMap<string, number>): number[][] =>
  declared.map((d) => namesUsed(d.node).flatMap((n) => slots.get(d.prefix + n) ?? []));

/**
 * Names of repeats that not all have the same flow: each repeat has its own flows and what follows them (`core.2.renewal`);
 * all other constants and parameters stay one for all (`core.tanks`).
 * @returns what has a slot, and the slots by all names that lead to them
 */
export function shareNames(all: readonly Declared[]): {
  declared: readonly Declared[];
  slots: ReadonlyMap<string, number>;
} {
  const own = new Map(all.map((d, i) => [d.name, i]));
  if (all.every((d) => d.name === d.shared)) return { declared: all, slots: own };
  const varies = varying(all, needsOf(all, own));
  const declared: Declared[] = [];
  const slots = new Map<string, number>();
  const whole = new Map<string, number>();
  all.forEach((d, i) => {
    const name = varies[i] ? d.name : d.shared;
    const slot = whole.get(name) ?? declared.push({ ...d, name }) - 1;
    whole.set(name, slot);
    slots.set(d.name, slot);
  });
  for (const [name, slot] of whole) slots.set(name, slot);
  return { declared, slots };
}

/** Which values are not the same in all repeats: flows into them, and what is made of those. */
function varying(all: readonly Declared[], needs: readonly (readonly number[])[]): boolean[] {
  const users: number[][] = all.map(() => []);
  needs.forEach((used, i) => {
    for (const j of used) users[j].push(i);
  });
  const varies = all.map((d) => d.role === "inflow" && d.name !== d.shared);
  const open = varies.flatMap((v, i) => (v ? [i] : []));
  for (const i of open) {
    for (const user of users[i]) {
      if (varies[user]) continue;
      varies[user] = true;
      open.push(user);
    }
  }
  return varies;
}

function namesUsed(node: Tree | undefined): readonly string[] {
  if (node?.type !== "scalar") return [];
  const written = parseValue(node.text);
  return isFault(written) ? [] : namesIn(written.expression);
}
