import type { Report } from "../problems/report.js";
import { type DocumentKind, documentKinds, type Shape } from "../schema/shape.js";
import { documents, type Fault } from "../schema/validators.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import { firstLine, type Located, locate, narrow } from "./locate.js";
import { plainOf } from "./plain.js";
import { child, entriesOf, type MapNode, type Tree } from "./tree.js";
import { found, wanted } from "./wording.js";

/** What the file says it is: its first key, or the only one of the five that it has; undefined where it has none. */
export function documentKind(tree: MapNode): DocumentKind | undefined {
  const first = documentKinds.find((kind) => tree.entries[0]?.key.text === kind);
  if (first) return first;
  const all = documentKinds.filter((kind) => child(tree, kind));
  return all.length === 1 ? all[0] : undefined;
}

/**
 * Checks a document against its declaration: keys, their sorts of value, choices. What the words mean is not looked at.
 * One finding a place; what this version does not honour is refused as `not-yet`.
 * @returns true where nothing is wrong
 */
export function checkShape(tree: MapNode, kind: DocumentKind, report: Report): boolean {
  const is = documentKind(tree);
  if (is !== kind) return wrongDocument(tree, is, kind, report);
  const { shape, validate } = documents[kind];
  const clear = kind !== "network" || noEmptyChange(child(tree, "change"), report);
  if (validate(plainOf(tree))) return clear;
  const places = new Set<string>();
  const findings: { at: Span; tell: () => void }[] = [];
  for (const fault of validate.errors ?? []) {
    const finding = findingOf(fault, tree, kind, shape, report);
    if (!finding) continue;
    const place = `${finding.at.source.path}:${finding.at.from}:${finding.own}`;
    if (!places.has(place)) findings.push(finding);
    places.add(place);
  }
  for (const { tell } of findings.sort((a, b) => a.at.from - b.at.from)) tell();
  return clear && findings.length === 0;
}

/** In a change `null` removes; a key left empty (its lines commented out, say) may not do so in silence. */
function noEmptyChange(change: Tree | undefined, report: Report): boolean {
  let clear = true;
  for (const { key, value } of entriesOf(change)) {
    if (value.type === "scalar" && value.empty && value.text === "") {
      report("empty-in-change", key.at, { key: key.text });
      clear = false;
    } else clear = noEmptyChange(value, report) && clear;
  }
  return clear;
}

function wrongDocument(tree: MapNode, is: DocumentKind | undefined, wanted: DocumentKind, report: Report): false {
  const first = tree.entries[0]?.key;
  const at = first?.at ?? firstLine(tree);
  if (is) report("wrong-document", at, { found: is, wanted });
  else report("unknown-document", at, { first: first?.text ?? "", nearest: nearest(first?.text ?? "", documentKinds) });
  return false;
}

interface Finding {
  readonly at: Span;
  /** Tells findings at one place apart that do not speak of the same: missing keys. */
  readonly own: string;
  readonly tell: () => void;
}

/** One fault of the validator in our words; undefined where it is only the echo of another. */
function findingOf(fault: Fault, tree: MapNode, kind: DocumentKind, shape: Shape, report: Report): Finding | undefined {
  if (fault.keyword === "if" || /\/oneOf\/\d+\/required$/.test(fault.schemaPath)) return undefined;
  const here = locate(tree, shape, fault.instancePath, `the ${kind}`);
  const finding = (at: Span, tell: () => void, own = ""): Finding => ({ at, own, tell });
  const where = here.key ? `'${here.name}'` : here.name;
  switch (fault.keyword) {
    case "additionalProperties": {
      const key = String(fault.params.additionalProperty);
      const inside = here.shape && narrow(here.shape, here.node);
      const known =
        inside?.is === "record"
          ? Object.keys(inside.keys).filter((k) => !inside.keys[k].later && !inside.keys[k].elsewhere)
          : [];
      const at = locate(tree, shape, `${fault.instancePath}/${pointerPart(key)}`, "").mark;
      return finding(at, () => report("unknown-key", at, { key, where, nearest: nearest(key, known), known }));
    }
    case "dependentRequired":
    case "required": {
      const key = String(fault.params.missingProperty);
      // A slope beside a table of standards: that there are two is told, not that one of them is half there.
      if (fault.keyword === "dependentRequired" && child(here.node, "points")) return undefined;
      if (key === "format" && !here.key) return finding(here.mark, () => report("missing-format", here.mark, {}), key);
      const inside = here.shape && narrow(here.shape, here.node);
      const example = inside?.is === "record" ? inside.keys[key]?.example : variantExample(here, key);
      return finding(here.mark, () => report("missing-key", here.mark, { key, where, example }), key);
    }
    case "oneOf": {
      const inside = here.shape && narrow(here.shape, here.node);
      const keys = inside?.is === "record" ? (inside.oneOf ?? []) : [];
      const there = keys.filter((key) => child(here.node, key));
      return finding(here.mark, () => report("one-of", here.mark, { where, keys, found: there }), "oneOf");
    }
    case "propertyNames": {
      const name = String(fault.params.propertyName);
      const at = locate(tree, shape, `${fault.instancePath}/${pointerPart(name)}`, "").mark;
      return finding(at, () => report("bad-name", at, { name }));
    }
    case "pattern":
      if (fault.schemaPath.includes("/propertyNames/")) return undefined;
      return finding(here.node.at, () => report("bad-name", here.node.at, { name: textIn(here) }));
    case "not":
      return notYet(here, report, finding);
    case "enum":
      return wrongChoice(here, report, finding);
    case "minItems":
    case "maxItems": {
      const at = firstLine(here.node);
      const items = here.node.type === "list" ? here.node.items : [];
      const limit = Number(fault.params.limit);
      const data = { key: here.name, found: items.length, wanted: limit, comma: withPoints(here.node, limit) };
      return finding(at, () => report("wrong-length", at, data));
    }
    default:
      return wrongShape(here, report, finding);
  }
}

/** `[0,5 L, 2,5 L]` as `[0.5 L, 2.5 L]`: a comma with a digit on either side and no space was a decimal one. */
function withPoints(node: Tree, wanted: number): string | undefined {
  if (node.type !== "list" || node.items.length <= wanted) return undefined;
  const written = node.at.source.text.slice(node.at.from, node.at.to);
  const corrected = written.replace(/(?<![\d.])(\d+),(?=\d)/g, "$1.");
  const decimals = corrected.split(",").length;
  return corrected !== written && decimals === wanted ? corrected : undefined;
}

type MakeFinding = (at: Span, tell: () => void, own?: string) => Finding;

function notYet(here: Located, report: Report, finding: MakeFinding): Finding {
  const elsewhere = here.says?.elsewhere;
  if (elsewhere) return finding(here.mark, () => report("not-here", here.mark, elsewhere));
  const inner = here.shape && narrow(here.shape, here.node);
  const what = inner?.is === "later" ? inner.says : `'${here.name}'`;
  return finding(here.mark, () => report("not-yet", here.mark, { what }));
}

function wrongChoice(here: Located, report: Report, finding: MakeFinding): Finding {
  if (here.node.type !== "scalar" || here.node.empty) return wrongShape(here, report, finding);
  const { at, text } = here.node;
  if (here.name === "format") return finding(at, () => report("unsupported-format", at, { found: text }));
  const inner = here.shape && narrow(here.shape, here.node);
  const { of, later = [] } = inner?.is === "choice" ? inner : { of: [] };
  if (later.includes(text)) return finding(at, () => report("not-yet", at, { what: `\`${here.name}: ${text}\`` }));
  const near = nearest(text, [...of, ...later]);
  return finding(at, () => report("wrong-choice", at, { key: here.name, found: text, of, nearest: near }));
}

function wrongShape(here: Located, report: Report, finding: MakeFinding): Finding {
  const { node, name, shape, says } = here;
  const example = says?.example;
  if (node.type === "scalar" && node.empty)
    return finding(here.mark, () => report("empty-value", here.mark, { key: name, example }));
  const at = firstLine(node);
  if (shape?.is === "whole" && node.type === "scalar")
    return finding(at, () =>
      report("not-whole", at, { key: name, found: node.text, atLeast: shape.atLeast, atMost: shape.atMost }),
    );
  const want = shape ? wanted(shape) : "something else";
  return finding(at, () => report("wrong-shape", at, { key: name, found: found(node), wanted: want, example }));
}

const textIn = ({ node }: Located): string => (node.type === "scalar" ? node.text : "");

const variantExample = ({ shape }: Located, key: string): string | undefined =>
  shape?.is === "variant" && key === shape.by ? Object.keys(shape.of)[0] : undefined;

const pointerPart = (key: string): string => key.replace(/~/g, "~0").replace(/\//g, "~1");
