import { type Document, isAlias, isMap, isScalar, isSeq, type Node, type Pair } from "yaml";
import type { CollectionPiece, Part, Piece, ScalarPiece } from "./piece.js";
import { columnOf, startsLineAfterBlank } from "./source-lines.js";

/** Cuts a parsed text into pieces, comments left out. The text must be a sound document of ours: no tags, no merge keys. */
export function cut(text: string, document: Document.Parsed): CollectionPiece | undefined {
  const root = document.contents;
  return isMap(root) ? (pieceOf(root as unknown as Node, text, 0) as CollectionPiece) : undefined;
}

/** @param parent column of the collection that the node stands in */
function pieceOf(node: Node | null, text: string, parent: number): Piece {
  const anchor = (node as { anchor?: string } | null)?.anchor;
  if (!node || (!isMap(node) && !isSeq(node))) return scalar(node, text, anchor, parent);
  const [from, to] = node.range ?? [0, 0];
  const column = columnOf(text, from);
  const parts = isMap(node)
    ? (node.items as Pair<Node, Node | null>[]).map((pair) => entry(pair, text, column))
    : (node.items as Node[]).map((item) => part(undefined, "", item, rangeOf(item)[0], text, column));
  return { type: isMap(node) ? "map" : "list", flow: node.flow === true, anchor, from, to, column, parts, end: [] };
}

function entry({ key, value }: Pair<Node, Node | null>, text: string, column: number): Part {
  const [from, to] = rangeOf(key);
  const anchor = (key as { anchor?: string }).anchor;
  const typed = (anchor === undefined ? "" : `&${anchor} `) + text.slice(from, to);
  return part(typed, isScalar(key) ? String(key.value) : "", value, from, text, column);
}

function part(
  key: string | undefined,
  name: string,
  value: Node | null,
  from: number,
  text: string,
  column: number,
): Part {
  const blank = startsLineAfterBlank(text, from);
  return { key, name, value: pieceOf(value, text, column), from, before: [], ends: [], blank };
}

const rangeOf = (node: Node | null): readonly [number, number] => [node?.range?.[0] ?? 0, node?.range?.[1] ?? 0];

function scalar(node: Node | null, text: string, anchor: string | undefined, parent: number): ScalarPiece {
  const [from, to] = rangeOf(node);
  const typed = node ? text.slice(from, to) : "";
  const alias = isAlias(node) ? node.source : undefined;
  const piece = { type: "scalar", anchor, text: typed, alias } as const;
  if (/^[|>]/.test(typed)) return { ...piece, form: "block", base: contentColumn(typed, parent) };
  return { ...piece, form: /[\r\n]/.test(typed) ? "lines" : "line", base: 0 };
}

/** The column at which the content of a block scalar begins: told by a digit in its header, else by its first line. */
function contentColumn(block: string, parent: number): number {
  const digit = /^[|>][+-]?([1-9])/.exec(block)?.[1];
  if (digit !== undefined) return parent + Number(digit);
  const first = block.split(/\r?\n/).find((line, i) => i > 0 && line.trim() !== "");
  return first === undefined ? 0 : first.length - first.trimStart().length;
}
