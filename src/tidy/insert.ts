import { collector, hasErrors } from "../problems/report.js";
import { child, type MapNode, type Tree } from "../read/tree.js";
import { readYaml } from "../read/yaml.js";
import { placeOf } from "../text/source.js";

/**
 * A document with one more value in it: in the maps along the path that are there, the rest made as `{a: {b: value}}`. In a
 * variant the path begins under its `change:`. Nothing else of the text is touched.
 * @returns undefined where there is no safe place for it
 */
export function withValue(
  text: string,
  path: readonly string[],
  value: string,
): { text: string; line: number } | undefined {
  const root = rootOf(text);
  if (!root) return undefined;
  let map = root;
  let depth = 0;
  for (; depth < path.length - 1; depth++) {
    const next = child(map, path[depth]);
    if (next === undefined) break;
    if (next.type !== "map") return undefined;
    map = next;
  }
  if (child(map, path[depth]) || map.entries.length === 0) return undefined;
  const rest = path.slice(depth + 1).reduceRight((inner, key) => `{${key}: ${inner}}`, value);
  const { at, added } = place(text, map, `${path[depth]}: ${rest}`);
  const result = text.slice(0, at) + added + text.slice(at);
  if (!holds(result, path, value)) return undefined;
  const from = at + added.length;
  return { text: result, line: placeOf({ source: { path: "", text: result }, from, to: from }).line };
}

/** Behind the last entry, in the manner of the map. */
function place(text: string, map: MapNode, entry: string): { at: number; added: string } {
  const last = map.entries[map.entries.length - 1].value.at;
  const end = text.slice(0, last.to).trimEnd().length;
  if (text[map.at.from] === "{") return { at: end, added: `, ${entry}` };
  const first = map.entries[0].key.at.from;
  const indent = text.slice(text.lastIndexOf("\n", first - 1) + 1, first);
  const newline = /\r?\n/.exec(text)?.[0] ?? "\n";
  const line = /[\r\n]/.exec(text.slice(end));
  return { at: line ? end + line.index : text.length, added: `${newline}${indent}${entry}` };
}

/** What the document or its change is made of; undefined where it cannot be read. */
function rootOf(text: string): MapNode | undefined {
  const { report, problems } = collector();
  const tree = readYaml({ path: "", text }, report);
  if (!tree || hasErrors(problems)) return undefined;
  const change = child(tree, "change");
  if (!change) return tree;
  return change.type === "map" ? change : undefined;
}

/** Does the value stand there, and only there once? An anchor would bring it to other places, too. */
function holds(text: string, path: readonly string[], value: string): boolean {
  const root = rootOf(text);
  const node = path.reduce<Tree | undefined>((at, key) => child(at, key), root);
  return root !== undefined && node?.type === "scalar" && node.text === value && timesAt(root, node.at.from) === 1;
}

const timesAt = (node: Tree, from: number): number => {
  if (node.type === "scalar") return node.at.from === from ? 1 : 0;
  const inside = node.type === "list" ? node.items : node.entries.map((e) => e.value);
  return inside.reduce((sum, n) => sum + timesAt(n, from), 0);
};
