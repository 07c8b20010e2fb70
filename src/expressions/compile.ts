import { type Expression, knownConstants, type Operator } from "./ast.js";
import { functionNamed } from "./functions.js";

/** A compiled expression: SI values by slot in, SI value out. Never allocates. */
export type Compiled = (env: ArrayLike<number>) => number;

/**
 * Compiles to closures; parts without names become numbers at once.
 * @param slotOf the slot of a name in the array of values
 * @throws where a name has no slot or a function is unknown: parsing and `dimensionOf` come first
 */
export function compileExpression(e: Expression, slotOf: (name: string) => number | undefined): Compiled {
  const part = build(e, slotOf);
  if (typeof part !== "number") return part;
  return () => part;
}

/** The value of an expression without names, or undefined. */
export function constantOf(e: Expression): number | undefined {
  const part = build(e, () => 0);
  return typeof part === "number" ? part : undefined;
}

/** A number where it is one whatever the names hold. */
type Part = number | Compiled;

function build(e: Expression, slotOf: (name: string) => number | undefined): Part {
  switch (e.type) {
    case "number":
      return e.value;
    case "name": {
      const known = knownConstants.get(e.name);
      if (known) return known.value;
      const slot = slotOf(e.name);
      if (slot === undefined) throw new Error(`no slot for ${e.name}`);
      return (env) => env[slot];
    }
    case "negate": {
      const a = build(e.of, slotOf);
      return typeof a === "number" ? -a : (env) => -a(env);
    }
    case "binary":
      return operate(e.operator, build(e.left, slotOf), build(e.right, slotOf));
    case "call": {
      const f = functionNamed(e.name);
      if (!f) throw new Error(`no function ${e.name}`);
      const args = e.args.map((arg) => build(arg, slotOf));
      const numbers = args.filter((a) => typeof a === "number");
      if (numbers.length === args.length) return f.value(numbers);
      const parts = args.map(asFunction);
      const x = parts.map(() => 0); // one array per call site: a call is never inside itself
      return (env) => {
        for (let i = 0; i < parts.length; i++) x[i] = parts[i](env);
        return f.value(x);
      };
    }
  }
}

const asFunction = (p: Part): Compiled => (typeof p === "number" ? () => p : p);

/** One closure per operator and place of a constant, so that the hot path does one thing. */
function operate(operator: Operator, left: Part, right: Part): Part {
  if (typeof left === "number" && typeof right === "number") return apply(operator, left, right);
  if (operator === "^" && typeof left !== "number") {
    if (right === 1) return left;
    if (right === 2) return (env) => left(env) ** 2;
  }
  const a = asFunction(left);
  if (typeof right === "number") {
    switch (operator) {
      case "+":
        return (env) => a(env) + right;
      case "-":
        return (env) => a(env) - right;
      case "*":
        return (env) => a(env) * right;
      case "/":
        return (env) => a(env) / right;
      case "^":
        return (env) => a(env) ** right;
    }
  }
  const b = right;
  switch (operator) {
    case "+":
      return (env) => a(env) + b(env);
    case "-":
      return (env) => a(env) - b(env);
    case "*":
      return (env) => a(env) * b(env);
    case "/":
      return (env) => a(env) / b(env);
    case "^":
      return (env) => a(env) ** b(env);
  }
}

function apply(operator: Operator, a: number, b: number): number {
  switch (operator) {
    case "+":
      return a + b;
    case "-":
      return a - b;
    case "*":
      return a * b;
    case "/":
      return a / b;
    case "^":
      return a ** b;
  }
}
