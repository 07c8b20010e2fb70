import {
  type Document,
  isMap,
  isPair,
  isScalar,
  isSeq,
  type Node,
  type Pair,
  parseDocument,
  visit,
  type YAMLMap,
} from "yaml";
import type { Random } from "./random.js";

type Change = (document: Document, nodes: readonly Node[], random: Random) => void;

const isNode = (x: unknown): x is Node => isMap(x) || isSeq(x) || isScalar(x);

/** Sound YAML that means something else: parts exchanged, nested, emptied, turned into another sort, shared by aliases. */
const changes: readonly Change[] = [
  (_, nodes, random) => {
    const [a, b] = [random.pick(nodes), random.pick(nodes)];
    if (isScalar(a) && isScalar(b)) [a.value, b.value] = [b.value, a.value];
    else if (isMap(a) && isMap(b) && !inside(a, b) && !inside(b, a)) [a.items, b.items] = [b.items, a.items];
  },
  (_, nodes, random) => {
    const map = random.pick(nodes.filter(isMap));
    if (map && map.items.length > 0) map.items.splice(random.below(map.items.length), 1);
  },
  (_, nodes, random) => {
    const [map, other] = [random.pick(nodes.filter(isMap)), random.pick(nodes.filter(isMap))];
    if (map && other && map !== other && other.items.length > 0 && !inside(map, other))
      map.items.push(random.pick(other.items));
  },
  (document, nodes, random) =>
    replaceValue(nodes, random, () =>
      document.createNode(random.pick([[], {}, null, "", [[]], { a: { a: {} } }, "1 L", 1e9, [1, 2, 3]])),
    ),
  (document, nodes, random) => replaceValue(nodes, random, (old) => document.createNode([old])),
  (document, nodes, random) => {
    const name = random.pick(["a", "rest", "feed", "product", "__proto__"]);
    replaceValue(nodes, random, (old) => {
      const map = document.createNode({}) as YAMLMap;
      map.items.push(document.createPair(name, old));
      return map;
    });
  },
  (document, nodes, random) => {
    const from = random.pick(nodes);
    const anchor = `n${random.below(1000)}`;
    if ((isMap(from) || isSeq(from) || isScalar(from)) && !from.anchor)
      replaceValue(nodes, random, () => document.createAlias(from, anchor));
  },
  (document, nodes, random) => {
    const pair = random.pick(pairsOf(nodes));
    if (pair)
      pair.key = document.createNode(
        random.pick(["kind", "to", "volume", "flow", "file", "at", "change", "constructor", "0"]),
      );
  },
];

const pairsOf = (nodes: readonly Node[]): Pair[] => nodes.filter(isMap).flatMap((m) => m.items.filter(isPair));

function replaceValue(nodes: readonly Node[], random: Random, put: (old: unknown) => unknown): void {
  const pair = random.pick(pairsOf(nodes));
  if (pair) pair.value = put(pair.value);
}

function inside(part: Node, whole: Node): boolean {
  let found = part === whole;
  visit(whole, {
    Node: (_, node) => {
      if (node === part) found = true;
    },
  });
  return found;
}

/** One change of structure, printed as YAML again; the text as it is where it is no YAML, or has no map in it. */
export function restructured(text: string, random: Random): string {
  const document = parseDocument(text, { uniqueKeys: false });
  const nodes: Node[] = [];
  if (document.errors.length > 0) return text;
  visit(document, { Node: (_, node) => (isNode(node) ? void nodes.push(node) : undefined) });
  if (!nodes.some(isMap)) return text;
  random.pick(changes)(document, nodes, random);
  try {
    return document.toString({ flowCollectionPadding: false });
  } catch {
    return text; // an alias before its anchor cannot be printed
  }
}
