import { isFault } from "../expressions/fault.js";
import { parseValue } from "../expressions/parse.js";
import { narrow } from "../read/locate.js";
import type { MapNode, ScalarNode, Tree } from "../read/tree.js";
import type { RecordShape, Shape } from "../schema/shape.js";
import { lineOf, written } from "./compare.js";
import type { Difference } from "./difference.js";
import { expressionKey, type Translate } from "./keys.js";

const asWritten: Translate = { place: (n) => n, value: (n) => n };

/**
 * What changed in meaning between two trials, chemistries, duties, studies or changes, key by key. Order of keys, layout,
 * spelling of units and notes do not count; a key that is left out counts as its default.
 */
export function diffDocuments(before: MapNode, after: MapNode, shape: Shape): Difference[] {
  return diffTrees(before, after, shape, "");
}

function diffTrees(a: Tree, b: Tree, shape: Shape | undefined, path: string): Difference[] {
  const inside = shape && (narrow(shape, b) ?? shape);
  if (a.type === "map" && b.type === "map") return diffMaps(a, b, inside, path);
  if (a.type === "list" && b.type === "list") {
    const of = inside?.is === "list" ? inside.of : undefined;
    return Array.from({ length: Math.max(a.items.length, b.items.length) }, (_, i) =>
      diffAt(a.items[i], b.items[i], of, `${path}[${i + 1}]`),
    ).flat();
  }
  return a.type === "scalar" && b.type === "scalar" && sameScalar(a, b, inside) ? [] : [changed(a, b, path)];
}

function diffMaps(a: MapNode, b: MapNode, shape: Shape | undefined, path: string): Difference[] {
  const keys = new Set([...b.entries, ...a.entries].map((e) => e.key.text));
  const record = shape?.is === "record" ? shape : undefined;
  return [...keys].flatMap((key) => {
    if (record && key === "notes") return [];
    const [x, y] = [a, b].map((map) => map.entries.find((e) => e.key.text === key)?.value);
    const inner = shape?.is === "named" ? shape.each : record?.keys[key]?.shape;
    if ((x === undefined || y === undefined) && isDefault(x ?? y, record, key)) return [];
    return diffAt(x, y, inner, path === "" ? key : `${path}.${key}`);
  });
}

function diffAt(a: Tree | undefined, b: Tree | undefined, shape: Shape | undefined, path: string): Difference[] {
  if (a && b) return diffTrees(a, b, shape, path);
  if (b) return [{ what: "added", of: "", name: path, after: written(b.at), lineAfter: lineOf(b.at) }];
  return a ? [{ what: "removed", of: "", name: path, before: written(a.at), lineBefore: lineOf(a.at) }] : [];
}

const changed = (a: Tree, b: Tree, path: string): Difference => ({
  what: "changed",
  of: "",
  name: path,
  before: written(a.at),
  after: written(b.at),
  lineBefore: lineOf(a.at),
  lineAfter: lineOf(b.at),
});

function isDefault(node: Tree | undefined, record: RecordShape | undefined, key: string): boolean {
  const says = record?.keys[key];
  return says?.default !== undefined && node?.type === "scalar" && sameTexts(node.text, says.default, says.shape);
}

const sameScalar = (a: ScalarNode, b: ScalarNode, shape: Shape | undefined): boolean =>
  a.empty === b.empty && sameTexts(a.text, b.text, shape);

function sameTexts(a: string, b: string, shape: Shape | undefined): boolean {
  if (a === b) return true;
  if (!shape || !holdsQuantity(shape)) return false;
  const [x, y] = [quantityKey(a), quantityKey(b)];
  return x !== undefined && x === y;
}

const holdsQuantity = (shape: Shape): boolean =>
  shape.is === "quantity" || (shape.is === "either" && shape.of.some((s) => s.is === "quantity"));

/** What a value says, whatever its units; undefined where it is none. */
function quantityKey(text: string): string | undefined {
  const value = parseValue(text);
  if (isFault(value)) return undefined;
  const key = expressionKey(value.expression, asWritten);
  const { uncertainty } = value;
  return uncertainty ? `${key} ± ${uncertainty.kind} ${Number(uncertainty.value.toPrecision(9))}` : key;
}
