import { one } from "../units/unit.js";
import type { Expression, Operator, Range } from "./ast.js";

const nowhere: Range = { from: 0, to: 0 };

/** A pure number. Made expressions have no place in a text. */
export const number = (value: number): Expression => ({ type: "number", value, unit: one, at: nowhere });

const known = (e: Expression): number | undefined => (e.type === "number" ? e.value : undefined);

/** True for the number x itself. */
export const is = (e: Expression, x: number): boolean => e.type === "number" && e.value === x;

const binary = (operator: Operator, left: Expression, right: Expression): Expression => ({
  type: "binary",
  operator,
  left,
  right,
  at: nowhere,
});

export const call = (name: string, ...args: Expression[]): Expression => ({ type: "call", name, args, at: nowhere });

/** Sum, simplified where a side is zero or both are numbers. The same holds for all that follow. */
export function sum(a: Expression, b: Expression): Expression {
  if (is(a, 0)) return b;
  if (is(b, 0)) return a;
  const [x, y] = [known(a), known(b)];
  return x !== undefined && y !== undefined ? number(x + y) : binary("+", a, b);
}

export function difference(a: Expression, b: Expression): Expression {
  if (is(b, 0)) return a;
  if (is(a, 0)) return negative(b);
  const [x, y] = [known(a), known(b)];
  return x !== undefined && y !== undefined ? number(x - y) : binary("-", a, b);
}

export function product(a: Expression, b: Expression): Expression {
  if (is(a, 0) || is(b, 0)) return number(0);
  if (is(a, 1)) return b;
  if (is(b, 1)) return a;
  const [x, y] = [known(a), known(b)];
  return x !== undefined && y !== undefined ? number(x * y) : binary("*", a, b);
}

export function quotient(a: Expression, b: Expression): Expression {
  if (is(a, 0)) return number(0);
  if (is(b, 1)) return a;
  const [x, y] = [known(a), known(b)];
  return x !== undefined && y !== undefined && y !== 0 ? number(x / y) : binary("/", a, b);
}

export function power(a: Expression, b: Expression): Expression {
  if (is(b, 0)) return number(1);
  if (is(b, 1)) return a;
  const [x, y] = [known(a), known(b)];
  return x !== undefined && y !== undefined ? number(x ** y) : binary("^", a, b);
}

export function negative(a: Expression): Expression {
  const x = known(a);
  if (x !== undefined) return number(0 - x);
  return a.type === "negate" ? a.of : { type: "negate", of: a, at: nowhere };
}
