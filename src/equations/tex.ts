import type { Expression } from "../expressions/ast.js";
import { formatNumber } from "../units/format.js";
import { inUnit, type Unit } from "../units/unit.js";

/** A name of the file as upright text in math. */
export const texName = (name: string): string => `\\text{${name.replace(/_/g, "\\_")}}`;

/** Symbols of a place: concentration at its outflow, volume, through-flow, space time. */
export const concentration = (node: string): string => `c_{${texName(node)}}`;
export const volume = (node: string): string => `V_{${texName(node)}}`;
export const throughFlow = (place: string): string => `Q_{${texName(place)}}`;
export const spaceTime = (node: string): string => `\\tau_{${texName(node)}}`;
/** A key of a compartment, and the amount of a substance that a body holds. */
export const keyOf = (key: string, place: string): string => `\\text{${key}}_{${texName(place)}}`;
export const held = (node: string): string => `m_{${texName(node)}}`;

/** The flow from one place to another; both ways where they exchange. */
export const streamFlow = (from: string, to: string, bothWays = false): string =>
  `Q_{${texName(from)}${bothWays ? "\\leftrightarrow" : "\\to"}${texName(to)}}`;

/** An SI value in a unit. */
export function texQuantity(si: number, unit: Unit, digits = 6): string {
  const number = formatNumber(inUnit(si, unit), digits)
    .replace("−", "-")
    .replace(/e(-?\d+)$/, "\\times 10^{$1}");
  return unit.name === "" ? number : `${number}\\ ${texUnit(unit.name)}`;
}

const texUnit = (name: string): string =>
  `\\text{${name.replace(/([%_#&$])/g, "\\$1").replace(/\^/g, "\\textasciicircum ")}}`;

/** An expression of the file as math, with the names as they stand there. `feed.flow` is the flow of that feed. */
export function texExpression(e: Expression): string {
  switch (e.type) {
    case "number":
      return texQuantity(e.value, e.unit, 12);
    case "name":
      return texValueName(e.name);
    case "negate":
      return `-${bracketed(e.of, e.of.type === "binary" && "+-".includes(e.of.operator))}`;
    case "call":
      return call(e.name, e.args.map(texExpression));
    case "binary":
      return binary(e);
  }
}

/** A name that has a value. */
export function texValueName(name: string): string {
  if (name === "pi") return "\\pi";
  return name.endsWith(".flow") ? throughFlow(name.slice(0, -5)) : texName(name);
}

function call(name: string, args: readonly string[]): string {
  if (name === "sqrt") return `\\sqrt{${args[0]}}`;
  if (name === "abs") return `\\left\\lvert ${args[0]}\\right\\rvert`;
  const own = ["exp", "min", "max", "tanh"].includes(name) ? `\\${name}` : undefined;
  const known = name === "log" ? "\\ln" : name === "log10" ? "\\log_{10}" : own;
  return `${known ?? `\\operatorname{${name}}`}\\left(${args.join(", ")}\\right)`;
}

function binary({ operator, left, right }: Extract<Expression, { type: "binary" }>): string {
  const isSum = (x: Expression): boolean => x.type === "negate" || (x.type === "binary" && "+-".includes(x.operator));
  switch (operator) {
    case "+":
      return `${texExpression(left)} + ${bracketed(right, right.type === "negate")}`;
    case "-":
      return `${texExpression(left)} - ${bracketed(right, isSum(right))}`;
    case "*":
      return `${bracketed(left, isSum(left))} \\cdot ${bracketed(right, isSum(right))}`;
    case "/":
      return `\\frac{${texExpression(left)}}{${texExpression(right)}}`;
    case "^":
      return `${bracketed(left, left.type !== "name")}^{${texExpression(right)}}`;
  }
}

const bracketed = (e: Expression, yes: boolean): string =>
  yes ? `\\left(${texExpression(e)}\\right)` : texExpression(e);
