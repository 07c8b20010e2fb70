import type { Report } from "../problems/report.js";
import { correctedLine, quote } from "./lines.js";
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
  return tree.type === "list" ? mendList(tree, report) : tree;
}

/** `[max(a, b) < c]`: a call that the comma cut. */
function mendList(list: ListNode, report: Report): ListNode {
  const brackets = list.at.source.text[list.at.from] === "[";
  const items: Tree[] = [];
  for (let i = 0; i < list.items.length; i++) {
    let item = mend(list.items[i], report);
    const first = i;
    for (let next = list.items[i + 1]; brackets && isCut(item) && isPlain(next); next = list.items[i + 1]) {
      item = part(item, item.at.from, next.at.to);
      i++;
    }
    if (i > first && item.type === "scalar") reportCut(item, quote(item.text), report);
    items.push(item);
  }
  return { ...list, items };
}

const isPlain = (node: Tree | undefined): node is ScalarNode => node?.type === "scalar" && node.plain && !node.empty;
const isCut = (node: Tree): node is ScalarNode => isPlain(node) && openBrackets(node.text) > 0;

function reportCut({ at }: ScalarNode, written: string, report: Report): void {
  const text = at.source.text.slice(at.from, at.to);
  report("comma-in-braces", at, { text, corrected: correctedLine(at, written) });
}

function mendMap(map: MapNode, report: Report): MapNode {
  const braces = map.at.source.text[map.at.from] === "{";
  const entries: Entry[] = [];
  for (let i = 0; i < map.entries.length; i++) {
    const entry = { key: map.entries[i].key, value: mend(map.entries[i].value, report) };
    if (!braces) entries.push(entry);
    else if (isLone(map, entry)) entries.push(mendGlued(entry, report));
    else {
      const tail = (k: number): ScalarNode | undefined => {
        const next = map.entries[i + 1 + k];
        return next && isLone(map, next) ? next.key : undefined;
      };
      const cut = mendCut(entry, tail, report);
      entries.push(cut.entry);
      i += cut.tails;
    }
  }
  return { ...map, entries };
}

/** A key with no colon after it. */
function isLone(map: MapNode, { key, value }: Entry): boolean {
  if (!key.plain || value.type !== "scalar" || !value.empty || value.text !== "") return false;
  return !/^\s*:/.test(map.at.source.text.slice(key.at.to, map.at.to));
}

/** `{b:1 L}`; any other lone key stays as it is. */
function mendGlued(entry: Entry, report: Report): Entry {
  const { key } = entry;
  const [, name, value] = /^([A-Za-z][\w-]*):(\S.*)$/s.exec(key.text) ?? [];
  if (name === undefined) return entry;
  report("colon-without-space", key.at, { key: key.text, corrected: correctedLine(key.at, `${name}: ${value}`) });
  const colon = key.at.from + name.length;
  return { key: part(key, key.at.from, colon), value: part(key, colon + 1, key.at.to) };
}

/** A value whose tail a comma cut off: a call whose bracket is open, a decimal comma, or the rest of a text. `tailAt(k)`: the k-th of the keys that follow, where it is a lone one. */
function mendCut(
  entry: Entry,
  tailAt: (k: number) => ScalarNode | undefined,
  report: Report,
): { entry: Entry; tails: number } {
  const head = entry.value;
  const none = { entry, tails: 0 };
  const first = isPlain(head) ? tailAt(0) : undefined;
  if (!isPlain(head) || !first) return none;
  let n = 0;
  let whole = head;
  let written = "";
  for (
    let tail: ScalarNode | undefined = first;
    tail && (openBrackets(whole.text) > 0 || isProse(tail));
    tail = tailAt(n)
  ) {
    if (n === 0 && isDecimal(head, tail)) break;
    whole = part(head, head.at.from, tail.at.to);
    written = quote(whole.text);
    n++;
  }
  if (n === 0 && isDecimal(head, first)) {
    written = `${head.text}.${first.text}`;
    whole = { ...part(head, head.at.from, first.at.to), text: written };
    n = 1;
  }
  if (n === 0) return none;
  reportCut(whole, written, report);
  return { entry: { key: entry.key, value: whole }, tails: n };
}

/** `1,5 L`, not `max(1,5)`: which of the two that is nobody can tell. */
const isDecimal = (head: ScalarNode, tail: ScalarNode): boolean =>
  /\d$/.test(head.text) && /^\d/.test(tail.text) && openBrackets(head.text) <= 0;

/** Words that cannot be a key: the rest of a text. */
const isProse = ({ text }: ScalarNode): boolean => !/^[A-Za-z][\w.-]*(:\S.*)?$/.test(text);

/** A plain scalar of a stretch of the same source. */
const part = (node: ScalarNode, from: number, to: number): ScalarNode => ({
  ...node,
  at: { ...node.at, from, to },
  text: node.at.source.text.slice(from, to),
});

const openBrackets = (text: string): number => text.split("(").length - text.split(")").length;
