import { type Dimension, dimensions, isRatio, sameDimension } from "../units/dimension.js";
import { formatNumber } from "../units/format.js";
import type { Expression } from "./ast.js";
import { type DimensionScope, dimensionOf } from "./dimension-of.js";
import { type Fault, isFault } from "./fault.js";

/**
 * What a temperature is: a point on a scale with a zero of its own (20 degC), the step between two points, or either
 * where it is written in K. All else is "either" too.
 */
export type Scale = "point" | "step" | "either";

/** Looks up dimensions of names, and which of them are points or steps. */
export interface ScaleScope extends DimensionScope {
  scale?(name: string): Scale | undefined;
}

/**
 * Whether an expression is a temperature or a difference, or what mixes the two up in it. Points are an affine space:
 * point - point = step, point + step = point, and nothing else is defined. A product of a named point with anything but
 * a pure number is left alone: in `gas-constant * T0` the absolute temperature is meant.
 */
export function scaleOf(e: Expression, scope: ScaleScope): Scale | Fault {
  switch (e.type) {
    case "number":
      return e.unit.offset !== 0 ? "point" : "either";
    case "name":
      return scope.scale?.(e.name) ?? "either";
    case "negate": {
      const of = scaleOf(e.of, scope);
      return of === "point" ? mixed(e, "a temperature cannot be taken from nothing", inKelvin) : of;
    }
    case "call":
      return ofCall(e, scope);
    case "binary":
      return ofBinary(e, scope);
  }
}

type Part<T extends Expression["type"]> = Extract<Expression, { type: T }>;

const inKelvin = "write a difference in K, like `5 K`, or an absolute temperature in K, like `293.15 K`";

const isPoint = (e: Expression): e is Part<"number"> => e.type === "number" && e.unit.offset !== 0;
const isNumber = (e: Expression): e is Part<"number"> => e.type === "number";

function ofBinary(e: Part<"binary">, scope: ScaleScope): Scale | Fault {
  const left = scaleOf(e.left, scope);
  if (isScaleFault(left)) return left;
  const right = scaleOf(e.right, scope);
  if (isScaleFault(right)) return right;
  if (e.operator === "+") return ofSum(e, left, right);
  if (e.operator === "-") return ofDifference(e, left, right);
  for (const part of [e.left, e.right])
    if (isPoint(part)) return mixed(part, "a temperature on a scale cannot be multiplied, divided or raised", inKelvin);
  if (e.operator === "^") return "either";
  const times = e.operator === "*";
  const pureBeside = (part: Expression, scale: Scale, beside: Expression): Scale | undefined =>
    (scale === "point" || isStep(part, scale)) && isPure(beside, scope) ? scale : undefined;
  const scaled = pureBeside(e.left, left, e.right) ?? (times ? pureBeside(e.right, right, e.left) : undefined);
  if (scaled === "point")
    return mixed(
      e,
      "a temperature on a scale cannot be multiplied or divided by a plain number",
      "multiply a difference instead, like `T0 + (T1 - T0) / 2`",
    );
  return scaled ? "step" : "either";
}

/** A number in K that is multiplied is a step, and so is what was one before. */
const isStep = (e: Expression, scale: Scale): boolean =>
  scale === "step" || (isNumber(e) && isTemperature(e.unit.dimension));

function ofSum({ left, right, at }: Part<"binary">, first: Scale, second: Scale): Scale | Fault {
  const unsure = first === "either" && !isNumber(left) && isPoint(right);
  if (unsure || (first === "point" && second === "point")) {
    const added = [right, left].find(isPoint);
    const fix =
      added?.type !== "number"
        ? "add a difference, like `T0 + (T1 - T2)`, or one in K, like `5 K`"
        : `write \`${stepOf(added)} K\` where a difference is added${unsure ? ", or put the temperature first and the difference in K after it" : ""}`;
    return mixed({ at }, "two temperatures on a scale cannot be added", fix);
  }
  if (first === "point" || second === "point") return "point";
  return first === "step" && second === "step" ? "step" : "either";
}

function ofDifference(e: Part<"binary">, left: Scale, right: Scale): Scale | Fault {
  if (right === "point")
    return left === "step" ? mixed(e, "a temperature cannot be taken from a difference", inKelvin) : "step";
  if (left === "point") return right === "step" ? "point" : "either";
  return left === "step" && right === "step" ? "step" : "either";
}

/** The first argument that is a point or a step says what a function of its kind gives. */
function ofCall(e: Part<"call">, scope: ScaleScope): Scale | Fault {
  const scales = e.args.map((arg) => scaleOf(arg, scope));
  const fault = scales.find(isScaleFault);
  if (fault) return fault;
  const same = e.name === "min" || e.name === "max" || e.name === "abs";
  return (same && (scales as Scale[]).find((s) => s !== "either")) || "either";
}

const isScaleFault = (s: Scale | Fault): s is Fault => typeof s !== "string";

function isPure(e: Expression, scope: DimensionScope): boolean {
  const d: Dimension | Fault | undefined = dimensionOf(e, scope);
  return d !== undefined && !isFault(d) && isRatio(d);
}

/** The number of a point as steps of 1 K: 5 of 5 degC, 5 of 9 degF. */
const stepOf = ({ value, unit }: Part<"number">): string => formatNumber(value - unit.offset);

const mixed = (e: Pick<Expression, "at">, why: string, fix: string): Fault => ({
  code: "temperature-scale",
  from: e.at.from,
  to: e.at.to,
  data: { why, fix },
});

/** Points and steps alike. */
const isTemperature = (d: Dimension): boolean => sameDimension(d, dimensions.temperature);
