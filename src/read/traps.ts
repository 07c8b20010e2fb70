import type { Report } from "../problems/report.js";
import { correctedLine } from "./lines.js";
import type { Entry, ListNode, MapNode, ScalarNode, Tree } from "./tree.js";

/**
 * YAML's own traps: braces whose text is valid YAML and does not say what its author meant.
 * @returns the tree as it was meant, so that what else is wrong can be found too
 */
export function mendTraps(tree: MapNode, report: Report): MapNode {
  return mendMap(tree, report);
}

function mend(tree: Tree, report: Report): Tree {
  if (tree.type === "map") return mendMap(tree, report);
  if (tree.type === "list") return { ...tree, items: tree.items.map((i) => mend(i, report)) } satisfies ListNode;
  return tree;
}

function mendMap(map: MapNode, report: Report): MapNode {
  const braces = map.at.source.text[map.at.from] === "{";
  const entries: Entry[] = [];
  for (const entry of map.entries) {
    if (braces && isLone(map, entry)) mendLone(entry, entries, report);
    else entries.push({ key: entry.key, value: mend(entry.value, report) });
  }
  return { ...map, entries };
}

/** A key with no colon after it. */
function isLone(map: MapNode, { key, value }: Entry): boolean {
  const noColon = !/^\s*:/.test(map.at.source.text.slice(key.at.to, map.at.to));
  return key.plain && value.type === "scalar" && value.empty && value.text === "" && noColon;
}

/** `{b:1 L}`, or the tail of a value that a comma cut: mended onto `entries`. Any other stays as it is. */
function mendLone(entry: Entry, entries: Entry[], report: Report): void {
  const { key } = entry;
  const glued = /^([A-Za-z][\w-]*):(\S.*)$/s.exec(key.text);
  if (glued) {
    report("colon-without-space", key.at, {
      key: key.text,
      corrected: correctedLine(key.at, `${glued[1]}: ${glued[2]}`),
    });
    const cut = key.at.from + glued[1].length;
    entries.push({ key: part(key, key.at.from, cut), value: part(key, cut + 1, key.at.to) });
    return;
  }
  const before = entries.at(-1)?.value;
  const meant = before?.type === "scalar" && before.plain && !before.empty ? joined(before, key) : undefined;
  if (!meant) {
    entries.push(entry);
    return;
  }
  report("comma-in-braces", meant.value.at, {
    text: part(meant.value, meant.value.at.from, meant.value.at.to).text,
    corrected: correctedLine(meant.value.at, meant.written),
  });
  entries[entries.length - 1] = { key: entries[entries.length - 1].key, value: meant.value };
}

/** The value that a comma cut, if it looks like one: a call whose bracket is open, or a decimal comma. */
function joined(head: ScalarNode, tail: ScalarNode): { value: ScalarNode; written: string } | undefined {
  const whole = part(head, head.at.from, tail.at.to);
  if (count(head.text, "(") > count(head.text, ")")) return { value: whole, written: `"${whole.text}"` };
  if (!/\d$/.test(head.text) || !/^\d/.test(tail.text)) return undefined;
  const written = `${head.text}.${tail.text}`;
  return { value: { ...whole, text: written }, written };
}

/** A plain scalar of a stretch of the same source. */
const part = (node: ScalarNode, from: number, to: number): ScalarNode => ({
  ...node,
  at: { ...node.at, from, to },
  text: node.at.source.text.slice(from, to),
});

const count = (text: string, letter: string): number => text.split(letter).length - 1;
