import { readDocument } from "../parse/parsed.js";
import { documentKind } from "../read/shape.js";
import { child, type MapNode, type Tree } from "../read/tree.js";
import { type DocumentKind, documentKinds, type KeyShape, type Shape } from "../schema/shape.js";
import type { Span } from "../text/source.js";
import { type DeclaredName, declaredNames } from "./names.js";
import { placeAt } from "./place.js";
import { allowedAt, recordsOf, wordSays } from "./shapes.js";

/** A document as an editor holds it: it may be broken; then `known` is what it was when it could be read last. */
export interface Open {
  readonly text: string;
  readonly known?: MapNode | undefined;
}

/** Something to put at the cursor. */
export interface Offer {
  readonly label: string;
  readonly is: "key" | "word" | "name";
  readonly says?: string;
  /** What takes the place of the word at the cursor. */
  readonly insert: string;
}

/** The tree of a text, where it can be read. */
export const treeOf = (text: string): MapNode | undefined => readDocument(text, "-").tree;

/** What the language says of the key or word at an offset, as Markdown, and what it is said of. */
export function describe(
  open: Open,
  offset: number,
): { readonly says: string; readonly from: number; readonly to: number } | undefined {
  const { kind, tree } = understood(open);
  if (!kind) return undefined;
  const { path, onKey, word, from, to } = placeAt(open.text, offset);
  if (word === "") return undefined;
  if (onKey || /^\s*:(\s|$)/.test(open.text.slice(to, to + 3))) {
    const keys = allowedAt(kind, [...path, word], tree).flatMap((a) => (a.key ? [a.key] : []));
    const says = [...new Set(keys.map((k) => keySays(word, k)))];
    if (says.length > 0) return { says: says.join("\n\n---\n\n"), from, to };
  } else {
    const by = path[path.length - 1] ?? "";
    const of = allowedAt(kind, path.slice(0, -1), tree).map((a) => wordSays(a.shape, by, word));
    const said = of.find((s) => s !== undefined);
    if (said) return { says: `**${word}**: ${said}`, from, to };
  }
  const name = declaredNames(tree).find((n) => n.name === word);
  return name && { says: nameSays(name, tree), from, to };
}

function keySays(name: string, { says, example, required, ...rest }: KeyShape): string {
  const notes = [
    required ? "must be there" : undefined,
    rest.default === undefined ? undefined : `without it: \`${rest.default}\``,
    example === undefined ? undefined : `like \`${name}: ${example}\``,
  ].filter((n) => n !== undefined);
  return `**${name}**: ${says}${notes.length > 0 ? `\n\n${notes.join("; ")}` : ""}`;
}

function nameSays({ name, what, at }: DeclaredName, tree: MapNode | undefined): string {
  const value = child(child(tree, `${what}s`), name);
  const written = value ? textAt(value).replace(/\s+/g, " ") : "";
  const about = child(value, "about");
  const line = at.source.text.slice(0, at.from).split("\n").length;
  return [
    `**${name}**: ${what}, line ${line}`,
    ...(about?.type === "scalar" ? [about.text] : []),
    ...(written !== "" && written.length < 200 ? [`\`${written}\``] : []),
  ].join("\n\n");
}

const textAt = ({ at }: Tree): string => at.source.text.slice(at.from, at.to);

/** What may be typed at an offset: keys that are not there yet, words that may stand there, names of the document. */
export function complete(
  open: Open,
  offset: number,
): { readonly offers: readonly Offer[]; readonly from: number; readonly to: number } {
  const { kind, tree } = understood(open);
  const { path, onKey, from, to } = placeAt(open.text, offset);
  const names = declaredNames(tree);
  if (!kind) {
    const starts = onKey && path.length === 0 ? documentKinds : [];
    return { from, to, offers: starts.map((k): Offer => ({ label: k, is: "key", insert: `${k}: ` })) };
  }
  const here = allowedAt(kind, path, tree);
  const node = nodeAt(tree, path);
  const offers = onKey
    ? here.flatMap(({ shape }) => recordsOf(shape, node)).flatMap((r) => keyOffers(r, path, names))
    : here.flatMap(({ shape }) => valueOffers(shape, path, names));
  const there = new Set(onKey && node?.type === "map" ? node.entries.map((e) => e.key.text) : []);
  const typed = open.text.slice(from, to);
  const once = new Map(offers.map((o) => [o.label, o]));
  return { from, to, offers: [...once.values()].filter((o) => !there.has(o.label) || o.label === typed) };
}

function keyOffers(
  record: ReturnType<typeof recordsOf>[number],
  path: readonly string[],
  names: readonly DeclaredName[],
): readonly Offer[] {
  if (record.is === "named") {
    return placesFor(path[path.length - 1] ?? "", names).map((n) => ({
      label: n.name,
      is: "name",
      says: n.what,
      insert: `${n.name}: `,
    }));
  }
  return Object.entries(record.keys)
    .filter(([, k]) => !k.later && !k.elsewhere)
    .map(([label, k]) => ({ label, is: "key", says: k.says, insert: `${label}: ` }));
}

function valueOffers(shape: Shape, path: readonly string[], names: readonly DeclaredName[]): readonly Offer[] {
  const last = path[path.length - 1] ?? "";
  const asName = (list: readonly DeclaredName[]): Offer[] =>
    list.map((n) => ({ label: n.name, is: "name", says: n.what, insert: n.name }));
  switch (shape.is) {
    case "choice":
      return shape.of.map((w) => ({ label: w, is: "word", insert: w }));
    case "either":
      return shape.of.flatMap((s) => valueOffers(s, path, names));
    case "list":
      return valueOffers(shape.of, path, names);
    case "name":
      return asName(placesFor(last, names));
    case "quantity": {
      const rest: Offer[] = path.includes("to")
        ? [{ label: "rest", is: "word", says: "what the others leave", insert: "rest" }]
        : [];
      return [...rest, ...asName(names.filter((n) => n.what === "constant" || n.what === "parameter"))];
    }
    default:
      return [];
  }
}

/** Names that a stream, an exchange or a reading may be given. */
function placesFor(key: string, names: readonly DeclaredName[]): readonly DeclaredName[] {
  const of = (...what: readonly DeclaredName["what"][]): DeclaredName[] => names.filter((n) => what.includes(n.what));
  if (key === "to") return of("compartment", "outlet");
  if (key === "exchange") return of("compartment");
  return of("feed", "compartment", "outlet");
}

/** Where a name at an offset is declared; or the file that stands there. */
export function definition(open: Open, offset: number): { readonly at: Span } | { readonly file: string } | undefined {
  const { tree } = understood(open);
  const start = open.text.lastIndexOf("\n", offset - 1) + 1;
  const end = open.text.indexOf("\n", offset);
  const line = open.text.slice(start, end < 0 ? undefined : end);
  const column = offset - start;
  for (const m of line.matchAll(/[\w./-]+\.(?:ya?ml|csv)\b/g)) {
    if (m.index <= column && column <= m.index + m[0].length) return { file: m[0] };
  }
  const { word } = placeAt(open.text, offset);
  // `chain.2` is a member of `chain`, `feed.flow` the flow of `feed`
  const found =
    declaredNames(tree).find((n) => n.name === word) ?? declaredNames(tree).find((n) => n.name === word.split(".")[0]);
  return found && { at: found.at };
}

function understood({ text, known }: Open): {
  readonly kind: DocumentKind | undefined;
  readonly tree: MapNode | undefined;
} {
  const tree = treeOf(text) ?? known;
  const first = documentKinds.find((k) => new RegExp(`^${k}:`, "m").test(text));
  return { tree, kind: (tree && documentKind(tree)) ?? first };
}

function nodeAt(tree: MapNode | undefined, path: readonly string[]): Tree | undefined {
  let node: Tree | undefined = tree;
  for (const key of path) node = child(node?.type === "list" ? undefined : node, key);
  return node;
}
