import { type Expression, namesIn, renamed, type Uncertainty, visit, type WrittenValue } from "../expressions/ast.js";
import { compileExpression } from "../expressions/compile.js";
import { dimensionOf } from "../expressions/dimension-of.js";
import { type Fault, isFault } from "../expressions/fault.js";
import { parseExpression, parseValue, parseWrittenUnit } from "../expressions/parse.js";
import { type Scale, scaleOf } from "../expressions/scale.js";
import type { Env, Value } from "../model/value.js";
import type { Report } from "../problems/report.js";
import { cutOff } from "../read/lines.js";
import type { ScalarNode, Tree } from "../read/tree.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";
import type { Basis } from "../units/basis.js";
import { nameDimension } from "../units/describe.js";
import { type Dimension, dimensions, isRatio, sameDimension } from "../units/dimension.js";
import { symbols } from "../units/table.js";
import { one, type Unit } from "../units/unit.js";
import { spanWithin } from "./span.js";
import { describeWanted, exampleOf, fits, isWeighed, type Wanted, wantedIn } from "./wanted.js";

export type { Wanted } from "./wanted.js";

/** The names that a value may use. A name with a slot but no dimension failed elsewhere: what uses it fails silently. */
export interface Scope {
  slot(name: string): number | undefined;
  dimension(name: string): Dimension | undefined;
  names(): readonly string[];
  /** Whether a temperature is a point on a scale or a difference; either where nobody can tell. */
  readonly scale?: (name: string) => Scale | undefined;
  /** The unit that a name's value is written in. */
  readonly unit?: (name: string) => Unit | undefined;
  /** Words of the language that may stand here in place of a value: a slip of one is told as such. */
  readonly words?: readonly string[];
  /** What volumes and flows count here; default: volume. */
  readonly basis?: Basis;
  /** What a name is called from outside, where the document is a part of another: `core.tanks` for its own `tanks`. */
  readonly whole?: (name: string) => string;
}

/** Where nothing but numbers may stand. */
export const emptyScope: Scope = { slot: () => undefined, dimension: () => undefined, names: () => [] };

/** Reads a value, finds its names, checks its dimension and compiles it. Undefined once its problems are reported. */
export function resolveValue(node: Tree | undefined, wanted: Wanted, scope: Scope, report: Report): Value | undefined {
  const own = wantedIn(wanted, scope.basis ?? "volume");
  const written = writtenValue(node, report, own);
  return written && bindValue(node as ScalarNode, written, own, scope, report);
}

/** The same for an absolute temperature: a difference of two will not do. */
export function resolveTemperature(node: Tree | undefined, scope: Scope, report: Report): Value | undefined {
  const value = resolveValue(node, dimensions.temperature, scope, report);
  if (value?.scale !== "step") return value;
  const why = "this is a difference of temperatures; a temperature is wanted";
  report("temperature-scale", value.at, { why, fix: "write the difference in K, like `20 degC - 5 K`" });
  return undefined;
}

/** The same for a rate law or bound, where no `±` may stand. */
export function resolveExpression(
  node: Tree | undefined,
  wanted: Wanted,
  scope: Scope,
  report: Report,
): Value | undefined {
  const scalar = scalarOf(node, wanted, report);
  if (!scalar) return undefined;
  const expression = parseExpression(scalar.text);
  if (isFault(expression)) return reportFault(scalar, expression, report);
  return bindValue(scalar, { expression }, wanted, scope, report);
}

/** The first half of `resolveValue`: the text alone, so that a caller can order names before it binds them. */
export function writtenValue(node: Tree | undefined, report: Report, wanted: Wanted = "any"): WrittenValue | undefined {
  const scalar = scalarOf(node, wanted, report);
  if (!scalar) return undefined;
  const written = parseValue(scalar.text);
  return isFault(written) ? reportFault(scalar, written, report) : written;
}

/** The second half: names, dimension, closures. */
export function bindValue(
  node: ScalarNode,
  written: WrittenValue,
  wanted: Wanted,
  scope: Scope,
  report: Report,
): Value | undefined {
  const { expression, uncertainty } = written;
  if (!namesKnown(node, expression, scope, report)) return undefined;
  const dimension = dimensionOf(expression, scope);
  if (!dimension) return undefined;
  if (isFault(dimension)) return reportFault(node, dimension, report);
  if (!fits(wanted, dimension)) return wrongDimension(node, expression, dimension, wanted, report, scope.basis);
  const scale = scaleOf(expression, scope);
  if (typeof scale !== "string") return reportFault(node, scale, report);
  const fault = uncertainty && spreadFault(uncertainty, dimension);
  if (fault) return reportFault(node, fault, report);
  const of = compileExpression(expression, (name) => scope.slot(name));
  const whole = scope.whole ? renamed(expression, scope.whole) : expression;
  return {
    at: node.at,
    dimension,
    unit: unitFor(expression, dimension, scale) ?? bareUnit(expression, dimension, scope),
    scale,
    expression: whole,
    uses: namesIn(whole),
    of,
    sd: uncertainty && spreadOf(uncertainty, of),
    ...(uncertainty && uncertainty.kind !== "absolute" ? { relative: true } : {}),
  };
}

/** A unit on its own, as beside the column of a table. */
export function resolveUnit(node: Tree | undefined, wanted: Wanted, report: Report): Unit | undefined {
  const scalar = scalarOf(node, wanted, report);
  if (!scalar) return undefined;
  const unit = parseWrittenUnit(scalar.text);
  if (isFault(unit)) return reportFault(scalar, unit, report);
  if (fits(wanted, unit.dimension)) return unit;
  const got = `the unit of ${nameDimension(unit.dimension)}`;
  const example = exampleOf(wanted).replace(/^\S+\s*/, "");
  report("wrong-dimension", scalar.at, {
    text: scalar.text,
    got,
    wanted: `that of ${describeWanted(wanted)}`,
    example,
  });
  return undefined;
}

/** Reports a fault of a scalar's text at its own place in the file. Always undefined, for `return reportFault(...)`. */
export function reportFault(node: ScalarNode, fault: Fault, report: Report): undefined {
  // A fault holds the data of its own code; the compiler cannot follow that through a union.
  const tell = report as (code: Fault["code"], at: Span, data: Fault["data"]) => void;
  tell(fault.code, spanWithin(node, fault.from, fault.to), fault.data);
  return undefined;
}

function scalarOf(node: Tree | undefined, wanted: Wanted, report: Report): ScalarNode | undefined {
  if (!node) return undefined;
  if (node.type === "scalar" && !node.empty && node.text.trim() !== "") return node;
  const found = node.type === "map" ? "a map" : node.type === "list" ? "a list" : "nothing";
  report("wrong-shape", node.at, { key: "a value", found, wanted: describeWanted(wanted), example: undefined });
  return undefined;
}

function namesKnown(node: ScalarNode, e: Expression, scope: Scope, report: Report): boolean {
  const own = new Set(namesIn(e));
  let known = true;
  visit(e, (part) => {
    if (part.type !== "name" || !own.has(part.name) || scope.slot(part.name) !== undefined) return;
    known = false;
    const names = scope.names();
    const at = spanWithin(node, part.at.from, part.at.to);
    const near = nearest(part.name, e.type === "name" ? [...names, ...(scope.words ?? [])] : names);
    const unit = symbols.has(part.name);
    report("unknown-name", at, { name: part.name, nearest: near, minus: asMinus(part.name, scope), unit });
  });
  return known;
}

/** `tank-1` read as `tank - 1`, where that makes sense. */
function asMinus(name: string, scope: Scope): string | undefined {
  const known = (part: string): boolean => /^\d+(\.\d+)?$/.test(part) || scope.slot(part) !== undefined;
  for (let i = name.indexOf("-"); i > 0; i = name.indexOf("-", i + 1)) {
    const [left, right] = [name.slice(0, i), name.slice(i + 1)];
    if (scope.slot(left) !== undefined && known(right)) return `${left} - ${right}`;
  }
  return undefined;
}

function wrongDimension(
  node: ScalarNode,
  e: Expression,
  got: Dimension,
  wanted: Wanted,
  report: Report,
  basis: Basis = "volume",
): undefined {
  const at = spanWithin(node, 0, node.text.length);
  const literal = e.type === "negate" ? e.of : e;
  if (literal.type === "number" && literal.unit.name === "") {
    const fixed = exampleOf(wanted, basis).replace(/^\S+/, node.text.slice(0, e.at.to));
    const cut = cutOff(node.at)?.trim();
    const zero = literal.value === 0;
    report("missing-unit", at, { text: node.text, wanted: describeWanted(wanted, basis), fixed, zero, cut });
  } else {
    const example = exampleOf(wanted, basis);
    report("wrong-dimension", at, {
      text: node.text,
      got: nameDimension(got),
      wanted: describeWanted(wanted, basis),
      example,
      weighed: basis === "volume" && isWeighed(got, wanted),
    });
  }
  return undefined;
}

/** The unit first written that has the dimension of the whole; degC only where the whole is a point on that scale. */
function unitFor(e: Expression, dimension: Dimension, scale: Scale): Unit | undefined {
  let unit: Unit | undefined;
  visit(e, (part) => {
    if (part.type !== "number" || part.unit.name === "" || !sameDimension(part.unit.dimension, dimension)) return;
    if (part.unit.offset === 0 || scale === "point") unit ??= part.unit;
  });
  return unit;
}

/** The unit of a pure number that no % or other unit went into: a Péclet number of 5 is no 500 %. */
function bareUnit(e: Expression, dimension: Dimension, scope: Scope): Unit | undefined {
  const bare = isRatio(dimension) && namesIn(e).every((name) => scope.unit?.(name)?.name === "");
  return bare ? one : undefined;
}

function spreadFault({ kind, unit, at }: Uncertainty, dimension: Dimension): Fault | undefined {
  const wrong = (why: string, fix: string): Fault => ({ code: "bad-uncertainty", ...at, data: { why, fix } });
  if (kind === "relative")
    return sameDimension(dimension, dimensions.temperature)
      ? wrong("a spread in % of a temperature has no meaning", "write it in K, like `35 degC ± 1 K`")
      : undefined;
  if (sameDimension(unit.dimension, dimension)) return undefined;
  return isRatio(unit.dimension)
    ? wrong("the number after `±` has no unit", "write it in the unit of the value, or in %")
    : wrong(
        `the value is ${nameDimension(dimension)}, its spread ${nameDimension(unit.dimension)}`,
        "write the spread in a unit of the value's kind, or in %",
      );
}

function spreadOf({ kind, value }: Uncertainty, of: (env: Env) => number): (env: Env) => number {
  return kind === "absolute" ? () => value : (env) => Math.abs(of(env)) * value;
}
