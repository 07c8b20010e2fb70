import { kinds } from "../compartments/index.js";
import type { Report } from "../problems/report.js";
import type { Files } from "../read/files.js";
import { beside } from "../read/paths.js";
import { checkShape } from "../read/shape.js";
import { child, entriesOf, itemsOf, type MapNode, type ScalarNode, type Tree, textOf } from "../read/tree.js";
import type { Span } from "../text/source.js";
import type { Basis } from "../units/basis.js";
import { wholeDocument } from "./based-on.js";
import { openNamed } from "./named-file.js";

/** A network document in its place: the one that was asked for, or one that stands in it as a part. */
export interface Instance {
  /**
   * Stands before the names of its values: empty for the document itself, `core.` for its part `core`, `core.2.` for one of
   * repeats that not all have the same flow.
   */
  readonly prefix: string;
  /** The same without the numbers of repeats: what all of them share goes by it. */
  readonly shared: string;
  readonly tree: MapNode;
  /** Values that those outside give to its names, by whole name without numbers of repeats. */
  readonly bindings: ReadonlyMap<string, Binding>;
  readonly parts: ReadonlyMap<string, Part>;
}

/** A line of a `with:`. */
export interface Binding {
  readonly key: ScalarNode;
  readonly value: Tree;
  /** The part that it is written at, and the prefixes of the document that it is written in. */
  readonly part: string;
  readonly prefix: string;
  readonly shared: string;
}

/** A compartment that is another network. */
export interface Part {
  readonly name: string;
  readonly at: Span;
  readonly node: MapNode;
  readonly repeat: number;
  readonly inlets: readonly string[];
  readonly outlets: readonly string[];
  /** One for all repeats; one for each where streams enter past the first, so that not all have the same flow. */
  readonly instances: readonly Instance[];
}

/** Parts and their repeats may come to so many bodies; so many may be written out, from so many files. */
const mostBodies = 100_000;
const mostParts = 3000;
const mostFiles = 1000;

/** What has been opened so far for one network. */
interface Opened {
  parts: number;
  readonly files: Set<string>;
}

/** Opens the parts of a network, and theirs. A part that cannot be used is reported and left out. */
export function openParts(tree: MapNode, files: Files, report: Report): Instance {
  const opened: Opened = { parts: 0, files: new Set() };
  const root = open(tree, { prefix: "", shared: "" }, new Map(), files, report, opened);
  const at = tree.entries.find((e) => e.key.text === "compartments")?.key.at ?? tree.at;
  if (opened.files.size > mostFiles) report("too-many-files", at, { limit: mostFiles });
  else if (opened.parts > mostParts) report("too-many-bodies", at, { limit: mostParts, of: "parts" });
  else if (bodiesOf(root) > mostBodies) report("too-many-bodies", at, { limit: mostBodies, of: "bodies" });
  else return root;
  return { ...root, parts: new Map() };
}

/** What a document counts in. */
export const basisOf = (tree: MapNode): Basis => (textOf(tree, "basis") === "mass" ? "mass" : "volume");

/** Counts a part that is about to be opened; false where that is one too many. */
function mayOpen(use: ScalarNode, opened: Opened): boolean {
  opened.files.add(beside(use.at.source.path, use.text));
  return ++opened.parts <= mostParts && opened.files.size <= mostFiles;
}

function open(
  tree: MapNode,
  names: Pick<Instance, "prefix" | "shared">,
  bindings: ReadonlyMap<string, Binding>,
  files: Files,
  report: Report,
  opened: Opened,
): Instance {
  const parts = new Map<string, Part>();
  const targets = targetsIn(tree);
  for (const { key, value: node } of entriesOf(child(tree, "compartments"))) {
    if (node.type !== "map" || !isPart(node)) continue;
    const use = child(node, "use");
    if (use?.type !== "scalar" || !mayOpen(use, opened)) continue;
    const inner = openNamed(use, "part", files, report);
    const whole = inner && checkShape(inner, "network", report) && wholeDocument(inner, "network", files, report);
    if (!whole) continue;
    const change = whole.entries.find((e) => e.key.text === "change");
    if (change) {
      report("change-only", change.key.at, { title: textOf(whole, "network") ?? "" });
      continue;
    }
    const [own, inside] = [basisOf(tree), basisOf(whole)];
    if (own !== inside) {
      report("part-basis", use.at, { title: textOf(whole, "network") ?? "", own, inside });
      continue;
    }
    const bound = bindingsOf(node, names, key.text, bindings);
    const inlets = entriesOf(child(whole, "feeds")).map((e) => e.key.text);
    const outlets = itemsOf(child(whole, "outlets")).flatMap((o) => (o.type === "scalar" ? [o.text] : []));
    const written = Number(textOf(node, "repeat") ?? 1);
    // What is no whole number is told with the shape; the rest of the document is looked at all the same.
    let repeat = Number.isInteger(written) && written >= 1 ? written : 1;
    if (repeat > 1 && (inlets.length !== 1 || outlets.length !== 1)) {
      const data = { part: key.text, inlets: inlets.length, outlets: outlets.length };
      report("repeat-ports", child(node, "repeat")?.at ?? key.at, data);
      repeat = 1;
    }
    const within = { prefix: `${names.prefix}${key.text}.`, shared: `${names.shared}${key.text}.` };
    const apart = repeat > 1 && targets.some((t) => isPastFirst(t, key.text));
    if (apart) opened.parts += repeat - 1;
    const count = !apart ? 1 : opened.parts > mostParts ? 0 : repeat;
    const instances = Array.from({ length: count }, (_, i) => {
      const own = apart ? { ...within, prefix: `${within.prefix}${i + 1}.` } : within;
      return open(whole, own, bound, files, report, opened);
    });
    if (count > 0) parts.set(key.text, { name: key.text, at: key.at, node, repeat, inlets, outlets, instances });
  }
  return { ...names, tree, bindings, parts };
}

/** Everything that stands under a `to:`; names of places among it. */
function targetsIn(tree: MapNode): string[] {
  const texts = (node: Tree | undefined): string[] =>
    node?.type === "scalar" ? [node.text] : entriesOf(node).flatMap(({ key, value }) => [key.text, ...texts(value)]);
  return [...entriesOf(child(tree, "feeds")), ...entriesOf(child(tree, "compartments"))].flatMap(({ value }) =>
    texts(child(value, "to")),
  );
}

/** Is it a repeat of a part behind the first, as `core.2` or `core.2.feed`? */
const isPastFirst = (target: string, part: string): boolean => {
  if (!target.startsWith(`${part}.`)) return false;
  const [number] = target.slice(part.length + 1).split(".");
  return /^[1-9]\d*$/.test(number) && number !== "1";
};

/** Is a compartment another network? */
export const isPart = (node: MapNode): boolean => kinds[textOf(node, "kind") ?? ""]?.placed === true;

/** What a part's own `with:` gives, and what those further out give to names inside it. */
function bindingsOf(
  node: MapNode,
  names: Pick<Instance, "prefix" | "shared">,
  part: string,
  outer: ReadonlyMap<string, Binding>,
): ReadonlyMap<string, Binding> {
  const within = `${names.shared}${part}.`;
  const bound = new Map([...outer].filter(([name]) => name.startsWith(within)));
  for (const { key, value } of entriesOf(child(node, "with"))) {
    // Where both give one, the part's own file has the word; the other is told that nothing is open there.
    bound.set(within + key.text, { key, value, part, ...names });
  }
  return bound;
}

/** A document and all its parts, outer ones first. */
export function allInstances(root: Instance): Instance[] {
  const found = [root];
  for (const instance of found) for (const part of instance.parts.values()) found.push(...part.instances);
  return found;
}

const bodiesOf = ({ tree, parts }: Instance): number => {
  let bodies = entriesOf(child(tree, "compartments")).length - parts.size;
  for (const p of parts.values()) bodies += p.repeat * (bodiesOf(p.instances[0]) + p.inlets.length + p.outlets.length);
  return bodies;
};
