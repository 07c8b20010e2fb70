import { type Alias, type Document, isAlias, isMap, isScalar, isSeq, type Node, type Pair } from "yaml";
import type { Report } from "../problems/report.js";
import type { Source, Span } from "../text/source.js";
import { quote } from "./lines.js";
import type { Entry, ListNode, MapNode, ScalarNode, Tree } from "./tree.js";

/** Brackets and indents may nest so deep. */
export const deepest = 100;

/** Aliases may copy so many nodes in all. */
const mostCopies = 10_000;

interface Growth {
  readonly source: Source;
  readonly report: Report;
  readonly anchors: Map<string, Node>;
  /** Anchors whose content is being copied: an alias to one of them is a circle. */
  readonly open: Set<Node>;
  readonly used: Set<string>;
  copies: number;
  /** The tree is of no use, but there may be more to find. */
  failed: boolean;
  /** There is no going on. */
  stopped: boolean;
}

/** Our tree of a parsed document, aliases copied in. Undefined where that cannot be. */
export function growTree(source: Source, document: Document.Parsed, report: Report): Tree | undefined {
  const growth: Growth = {
    source,
    report,
    anchors: new Map(),
    open: new Set(),
    used: new Set(),
    copies: 0,
    failed: false,
    stopped: false,
  };
  const tree = grow(document.contents, growth, 0, 0);
  if (!growth.stopped)
    for (const [name, node] of growth.anchors) if (!growth.used.has(name)) unusedAnchor(name, node, growth);
  return growth.failed ? undefined : tree;
}

function grow(node: Node | null, growth: Growth, depth: number, end: number): Tree {
  if (growth.stopped || !node) return emptyNode(growth, end);
  const at = spanOf(node, growth.source);
  if (depth > deepest) return stop(growth, () => growth.report("too-deep", at, { limit: deepest }), end);
  if (isAlias(node)) return growAlias(node, growth, depth);
  if (growth.open.size > 0 && ++growth.copies > mostCopies)
    return stop(growth, () => growth.report("too-many-copies", at, { limit: mostCopies }), end);
  refuseTag(node, growth);
  const name = (node as { anchor?: string }).anchor;
  // An anchor may be named anew: an alias means the latest before it.
  if (name !== undefined && growth.open.size === 0) growth.anchors.set(name, node);
  if (isScalar(node)) return scalar(node, at);
  if (isMap(node)) return mapNode(node.items as Pair<Node, Node | null>[], growth, depth, at);
  if (isSeq(node))
    return {
      type: "list",
      at,
      items: (node.items as Node[]).map((item) => grow(item, growth, depth + 1, at.from)),
    } satisfies ListNode;
  return emptyNode(growth, at.from);
}

function mapNode(pairs: readonly Pair<Node, Node | null>[], growth: Growth, depth: number, at: Span): MapNode {
  const entries: Entry[] = [];
  const places = new Map<string, Span>();
  for (const pair of pairs) {
    const key = keyNode(pair.key, growth);
    const value = grow(pair.value, growth, depth + 1, key?.at.to ?? at.from);
    if (!key) continue;
    const earlier = places.get(key.text);
    if (earlier) {
      growth.report("duplicate-key", key.at, { key: key.text }, { at: earlier, says: "it stands here first" });
      growth.failed = true;
      continue;
    }
    places.set(key.text, key.at);
    entries.push({ key, value });
  }
  return { type: "map", at, entries };
}

function keyNode(node: Node | null, growth: Growth): ScalarNode | undefined {
  const at = node ? spanOf(node, growth.source) : { source: growth.source, from: 0, to: 0 };
  const bad = (report: () => void): undefined => {
    report();
    growth.failed = true;
  };
  if (!node || !isScalar(node)) {
    if (isAlias(node)) growth.used.add(node.source);
    const found = isMap(node) ? "a map" : isSeq(node) ? "a list" : isAlias(node) ? "an alias" : "nothing";
    return bad(() => growth.report("key-not-text", at, { found }));
  }
  const key = scalar(node, at);
  if (key.plain && key.text === "<<") return bad(() => growth.report("merge-key", at, {}));
  if (key.text === "__proto__") return bad(() => growth.report("forbidden-key", at, { key: key.text }));
  if (key.text === "") return bad(() => growth.report("key-not-text", at, { found: "nothing" }));
  return key;
}

/** Text as typed, without quotes; places of copies stay where the text is. */
function scalar(node: Node, at: Span): ScalarNode {
  const { type, value, source: typed } = node as { type?: string; value: unknown; source?: string };
  const plain = type === "PLAIN" || type === undefined;
  const text = String(value ?? typed ?? "");
  return { type: "scalar", at, text, plain, empty: plain && /^(|~|null|Null|NULL)$/.test(text) };
}

function growAlias(node: Alias, growth: Growth, depth: number): Tree {
  const at = spanOf(node, growth.source);
  const name = node.source;
  const target = growth.anchors.get(name);
  growth.used.add(name);
  if (!target)
    return refuse(growth, () => growth.report("unknown-anchor", at, { name, quoted: quote(`*${name}`) }), at.from);
  if (growth.open.has(target)) return refuse(growth, () => growth.report("anchor-circle", at, { name }), at.from);
  growth.open.add(target);
  const copy = grow(target, growth, depth, at.from);
  growth.open.delete(target);
  return copy;
}

function unusedAnchor(name: string, node: Node, growth: Growth): void {
  const { text } = growth.source;
  const from = text.lastIndexOf(`&${name}`, node.range?.[0] ?? text.length);
  if (from < 0) return;
  const to = Math.max(from + name.length + 1, isScalar(node) ? (node.range?.[1] ?? 0) : 0);
  const at = { source: growth.source, from, to };
  growth.report("unused-anchor", at, { name, quoted: quote(text.slice(from, to)) });
  growth.failed = true;
}

function refuseTag(node: Node, growth: Growth): void {
  if (!node.tag) return;
  const at = spanOf(node, growth.source);
  const from = growth.source.text.lastIndexOf("!", at.from);
  const span = { ...at, from: from < 0 ? at.from : from };
  growth.report("yaml-tag", span, { tag: node.tag, quoted: quote(growth.source.text.slice(span.from, span.to)) });
  growth.failed = true;
}

/** Nothing more is looked at: every further place would say the same. */
function stop(growth: Growth, report: () => void, end: number): ScalarNode {
  if (!growth.stopped) report();
  growth.stopped = true;
  growth.failed = true;
  return emptyNode(growth, end);
}

function refuse(growth: Growth, report: () => void, end: number): ScalarNode {
  report();
  growth.failed = true;
  return emptyNode(growth, end);
}

const emptyNode = ({ source }: Growth, at: number): ScalarNode => ({
  type: "scalar",
  at: { source, from: at, to: at },
  text: "",
  plain: true,
  empty: true,
});

function spanOf(node: Node, source: Source): Span {
  const [from, to] = node.range ?? [0, 0];
  return { source, from, to };
}
