import { evaluateNames } from "../compile/evaluate.js";
import type { Expression } from "../expressions/ast.js";
import { isFault } from "../expressions/fault.js";
import { parseValue } from "../expressions/parse.js";
import type { Named, Network } from "../model/network.js";
import type { Problem } from "../problems/problem.js";
import { collector } from "../problems/report.js";
import { child, type MapNode, type ScalarNode, type Tree } from "../read/tree.js";
import { placeOf } from "../text/source.js";
import { differenceInUnit, fromUnit, inUnit, type Unit } from "../units/unit.js";
import { withValue } from "./insert.js";

/** A value to put back, SI, and its standard error where there is one. */
export interface NewValue {
  readonly name: string;
  readonly value: number;
  readonly standardError: number | undefined;
}

/** A value that was put back: the text of the value before and after, and its line. */
export interface Rewritten {
  readonly name: string;
  readonly before: string;
  readonly after: string;
  readonly line: number;
}

export interface WrittenBack {
  /** The file with the new values; undefined where one of them cannot be put back. */
  readonly text: string | undefined;
  readonly rewritten: readonly Rewritten[];
  readonly problems: readonly Problem[];
}

/** A document whose parameters stand under `parameters:`: a network, or a chemistry. */
export interface Written extends Pick<Network, "at" | "names" | "order" | "units"> {
  readonly tree: MapNode;
}

/**
 * The text of a network with new values of parameters in the place of the old ones. Only the digits of each `value:` are
 * replaced, so that comments, order, quotes, units and a `±` beside the value stay; a rule is replaced by a number in the
 * unit that it had. As many digits as the standard error supports (to its second), more where the rounded number would
 * leave its bounds; six without one. A value that other networks share, in the base of a variant or in a part, is left
 * alone: the new one goes into the network's own `change:`, or into the `with:` of the part.
 */
export function writeBack(network: Written, values: readonly NewValue[]): WrittenBack {
  const { report, problems } = collector();
  const { source } = network.at;
  const spans = spansOf(network.tree);
  const edits: (Rewritten & { readonly from: number; readonly to: number })[] = [];
  const additions: Addition[] = [];
  for (const given of values) {
    const named = network.names.find((n) => n.name === given.name && n.role === "parameter");
    const node = child(child(child(network.tree, "parameters"), given.name), "value");
    const refuse = (why: string): void => report("not-written-back", node?.at ?? network.at, { name: given.name, why });
    const path = named && pathOf(named, source.path);
    if (path) additions.push({ given, named, path });
    else if (!named || node?.type !== "scalar") refuse("it is no parameter with a `value:`");
    else if ((spans.get(node.at.from) ?? 0) > 1) refuse("an anchor shares it with other places");
    else {
      const edit = editOf(node, named, given, network);
      if (edit) edits.push(edit);
      else refuse("its text is not written as a plain value");
    }
  }
  let text = [...edits]
    .sort((a, b) => b.from - a.from)
    .reduce((t, { from, to, after }) => t.slice(0, from) + after + t.slice(to), source.text);
  const rewritten = edits.map(({ from: _, to: __, ...edit }): Rewritten => edit);
  for (const { given, named, path } of additions) {
    const { at, unit, expression } = named.value;
    const written = plainUnit(expression) ?? unit ?? network.units.unitFor(named.value.dimension);
    const after = `${digitsOf(given, written, boundsOf(named, network))} ${written.name}`.trim();
    const added = withValue(text, path, after);
    if (added) {
      text = added.text;
      rewritten.push({ name: given.name, before: at.source.text.slice(at.from, at.to), after, line: added.line });
    } else {
      const why = `'${source.path}' has no place for it under \`${path.slice(0, -1).join(": ")}\``;
      report("not-written-back", network.at, { name: given.name, why });
    }
  }
  return problems.length > 0 ? { text: undefined, rewritten: [], problems } : { text, rewritten, problems };
}

/** A value that is written in a file of others, and where this network's own may stand. */
interface Addition {
  readonly given: NewValue;
  readonly named: Named;
  readonly path: readonly string[];
}

/** Undefined where the value is written in the network's own file. */
function pathOf({ name, value }: Named, own: string): readonly string[] | undefined {
  const dot = name.indexOf(".");
  if (dot >= 0) return ["compartments", name.slice(0, dot), "with", name.slice(dot + 1)];
  return value.at.source.path === own ? undefined : ["parameters", name, "value"];
}

/** How often each place of the source stands in the tree: an alias brings it there again. */
function spansOf(tree: Tree): Map<number, number> {
  const spans = new Map<number, number>();
  const look = (node: Tree): void => {
    if (node.type === "scalar") spans.set(node.at.from, (spans.get(node.at.from) ?? 0) + 1);
    else if (node.type === "list") node.items.forEach(look);
    else for (const { value } of node.entries) look(value);
  };
  look(tree);
  return spans;
}

function editOf(node: ScalarNode, named: Named, given: NewValue, network: Written) {
  const { source, from, to } = node.at;
  const raw = source.text.slice(from, to);
  const inset = node.plain ? 0 : 1;
  if (raw.slice(inset, raw.length - inset) !== node.text) return undefined;
  const written = parseValue(node.text);
  if (isFault(written)) return undefined;
  const { at } = written.expression;
  const old = node.text.slice(at.from, at.to);
  const unit = plainUnit(written.expression) ?? named.value.unit ?? network.units.unitFor(named.value.dimension);
  const number = digitsOf(given, unit, boundsOf(named, network));
  // What follows the digits is the unit as it was typed.
  const tail = plainUnit(written.expression)
    ? /^[-+−]?(?:\d+\.?\d*|\.\d+)(?:[eE][-+]?\d+)?(.*)$/s.exec(old)?.[1]
    : undefined;
  const after = tail === undefined ? `${number} ${unit.name}`.trim() : number + tail;
  const start = from + inset + at.from;
  const line = placeOf({ source, from: start, to: start }).line;
  return { name: given.name, before: old, after, line, from: start, to: from + inset + at.to };
}

/** The unit of a value that is a number and no more. */
function plainUnit(e: Expression): Unit | undefined {
  if (e.type === "number") return e.unit;
  return e.type === "negate" && e.of.type === "number" ? e.of.unit : undefined;
}

function boundsOf({ between }: Named, network: Written): readonly [number, number] {
  if (!between) return [Number.NEGATIVE_INFINITY, Number.POSITIVE_INFINITY];
  const env = evaluateNames(network);
  return [between[0].of(env), between[1].of(env)];
}

function digitsOf({ value, standardError }: NewValue, unit: Unit, [low, high]: readonly [number, number]): string {
  const x = inUnit(value, unit);
  const error = standardError === undefined ? 0 : differenceInUnit(standardError, unit);
  const supported =
    error > 0 && x !== 0 && Number.isFinite(error)
      ? Math.floor(Math.log10(Math.abs(x))) - Math.floor(Math.log10(error)) + 2
      : 6;
  const isInside = (text: string): boolean => {
    const si = fromUnit(Number(text), unit);
    return si >= low && si <= high;
  };
  for (let digits = Math.min(17, Math.max(2, supported)); digits < 17; digits++) {
    const text = String(Number(x.toPrecision(digits)));
    if (isInside(text)) return text;
  }
  return String(x);
}
