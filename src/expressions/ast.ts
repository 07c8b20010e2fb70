import type { Dimension } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";

/** Offsets into the text of the expression. */
export interface Range {
  readonly from: number;
  readonly to: number;
}

/** A parsed expression. Numbers are in SI already; `unit` is what stood beside them. */
export type Expression =
  | { readonly type: "number"; readonly value: number; readonly unit: Unit; readonly at: Range }
  | { readonly type: "name"; readonly name: string; readonly at: Range }
  | { readonly type: "negate"; readonly of: Expression; readonly at: Range }
  | {
      readonly type: "binary";
      readonly operator: Operator;
      readonly left: Expression;
      readonly right: Expression;
      readonly at: Range;
    }
  | { readonly type: "call"; readonly name: string; readonly args: readonly Expression[]; readonly at: Range };

export type Operator = "+" | "-" | "*" | "/" | "^";

/** A whole value: an expression, and one standard deviation where the file states one (`±`), absolute in SI or relative. */
export interface WrittenValue {
  readonly expression: Expression;
  readonly uncertainty?: Uncertainty;
}

export interface Uncertainty {
  readonly kind: "absolute" | "relative";
  readonly value: number;
  /** The unit beside it. */
  readonly unit: Unit;
  readonly at: Range;
}

/** Two sides that must stand in an order: `riser + stagnant < total`. */
export interface Comparison {
  readonly left: Expression;
  readonly operator: "<" | "<=" | ">" | ">=";
  readonly right: Expression;
}

/** Physical constants that every expression knows. CODATA 2018; the gas constant is exact since the 2019 SI, J/(mol K). */
export const knownConstants: ReadonlyMap<string, { readonly value: number; readonly dimension: Dimension }> = new Map([
  ["pi", { value: Math.PI, dimension: [0, 0, 0, 0, 0, 0, 0] }],
  ["gas-constant", { value: 8.31446261815324, dimension: [2, 1, -2, -1, -1, 0, 0] }],
]);

/** Every name in an expression, once each, in order of appearance; known constants left out. */
export function namesIn(e: Expression): readonly string[] {
  const found = new Set<string>();
  visit(e, (part) => {
    if (part.type === "name" && !knownConstants.has(part.name)) found.add(part.name);
  });
  return [...found];
}

/** The same expression over other names; known constants keep theirs. */
export function renamed(e: Expression, name: (name: string) => string): Expression {
  switch (e.type) {
    case "number":
      return e;
    case "name":
      return knownConstants.has(e.name) ? e : { ...e, name: name(e.name) };
    case "negate":
      return { ...e, of: renamed(e.of, name) };
    case "binary":
      return { ...e, left: renamed(e.left, name), right: renamed(e.right, name) };
    case "call":
      return { ...e, args: e.args.map((arg) => renamed(arg, name)) };
  }
}

/** Calls `see` on an expression and all within it, from left to right. */
export function visit(e: Expression, see: (part: Expression) => void): void {
  see(e);
  if (e.type === "negate") visit(e.of, see);
  else if (e.type === "binary") {
    visit(e.left, see);
    visit(e.right, see);
  } else if (e.type === "call") for (const arg of e.args) visit(arg, see);
}
