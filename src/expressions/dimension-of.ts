import { nameDimension } from "../units/describe.js";
import { type Dimension, dimensions, isRatio, over, sameDimension, times, toPower } from "../units/dimension.js";
import { type Expression, knownConstants, namesIn } from "./ast.js";
import { constantOf } from "./compile.js";
import { type Fault, isFault } from "./fault.js";
import { functionNamed } from "./functions.js";

/** Looks up dimensions of names. */
export interface DimensionScope {
  dimension(name: string): Dimension | undefined;
}

/**
 * The dimension of an expression, or what does not fit in it.
 * @returns undefined where a name has no known dimension: that is a problem told elsewhere
 */
export function dimensionOf(e: Expression, scope: DimensionScope): Dimension | Fault | undefined {
  switch (e.type) {
    case "number":
      return e.unit.dimension;
    case "name":
      return knownConstants.get(e.name)?.dimension ?? scope.dimension(e.name);
    case "negate":
      return dimensionOf(e.of, scope);
    case "call":
      return ofCall(e, scope);
    case "binary":
      return e.operator === "^" ? ofPower(e, scope) : ofBinary(e, scope);
  }
}

type Part<T extends Expression["type"]> = Extract<Expression, { type: T }>;
type Result = Dimension | Fault | undefined;

function ofBinary(e: Part<"binary">, scope: DimensionScope): Result {
  const left = dimensionOf(e.left, scope);
  if (!left || isFault(left)) return left;
  const right = dimensionOf(e.right, scope);
  if (!right || isFault(right)) return right;
  if (e.operator === "*") return times(left, right);
  if (e.operator === "/") return over(left, right);
  if (sameDimension(left, right)) return left;
  const what = e.operator === "+" ? "added" : "subtracted";
  return fault(e, "unlike-terms", { what, left: nameDimension(left), right: nameDimension(right) });
}

function ofPower(e: Part<"binary">, scope: DimensionScope): Result {
  const exponent = dimensionOf(e.right, scope);
  if (!exponent || isFault(exponent)) return exponent;
  if (!isRatio(exponent)) {
    const why = `the exponent is ${nameDimension(exponent)}`;
    return { code: "bad-power", ...e.right.at, data: { why, fix: "make the exponent a pure number" } };
  }
  const base = dimensionOf(e.left, scope);
  if (!base || isFault(base) || isRatio(base)) return base;
  const value = namesIn(e.right).length === 0 ? constantOf(e.right) : undefined;
  if (value !== undefined && Number.isFinite(value)) return toPower(base, value);
  const why = `${nameDimension(base)} is raised to a power that is not a plain number`;
  const fix = "write the exponent as a number, or divide the base by a value of its own unit first";
  return { code: "bad-power", ...e.right.at, data: { why, fix } };
}

function ofCall(e: Part<"call">, scope: DimensionScope): Result {
  const f = functionNamed(e.name);
  if (!f) return fault(e, "unknown-function", { name: e.name, nearest: undefined });
  let first: Dimension | undefined;
  for (const arg of e.args) {
    const d = dimensionOf(arg, scope);
    if (!d || isFault(d)) return d;
    if (f.takes === "pure" && !isRatio(d))
      return { code: "ratio-wanted", ...arg.at, data: { what: e.name, got: nameDimension(d) } };
    first ??= d;
    if (!sameDimension(first, d))
      return {
        code: "unlike-terms",
        ...arg.at,
        data: { what: `compared by \`${e.name}\``, left: nameDimension(first), right: nameDimension(d) },
      };
  }
  return f.gives(first ?? dimensions.ratio);
}

function fault<C extends "unlike-terms" | "unknown-function">(
  e: Expression,
  code: C,
  data: Extract<Fault, { code: C }>["data"],
): Fault {
  return { code, from: e.at.from, to: e.at.to, data } as Extract<Fault, { code: C }>;
}
