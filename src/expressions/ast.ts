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
  readonly uncertainty?: { readonly kind: "absolute" | "relative"; readonly value: number };
}
