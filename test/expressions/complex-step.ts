import type { Expression } from "../../src/expressions/ast.js";

/** Real and imaginary part. */
type Complex = readonly [number, number];

/**
 * The derivative by a complex step (Squire & Trapp, SIAM Review 40 (1998) 110-112): Im f(x + ih) / h, free of
 * cancellation, so good to rounding. Its own evaluator: it shares nothing with the code under test but the parser.
 */
export function complexStep(e: Expression, names: readonly string[], env: readonly number[], name: string): number {
  const h = 1e-30;
  return evaluate(e, (n) => [env[names.indexOf(n)], n === name ? h : 0])[1] / h;
}

function evaluate(e: Expression, at: (name: string) => Complex): Complex {
  const of = (part: Expression) => evaluate(part, at);
  switch (e.type) {
    case "number":
      return [e.value, 0];
    case "name":
      return e.name === "pi" ? [Math.PI, 0] : at(e.name);
    case "negate":
      return times([-1, 0], of(e.of));
    case "binary":
      return binary[e.operator](of(e.left), of(e.right));
    case "call":
      return calls[e.name](e.args.map(of));
  }
}

const plus = (a: Complex, b: Complex): Complex => [a[0] + b[0], a[1] + b[1]];
const times = (a: Complex, b: Complex): Complex => [a[0] * b[0] - a[1] * b[1], a[0] * b[1] + a[1] * b[0]];
const minus = (a: Complex, b: Complex): Complex => [a[0] - b[0], a[1] - b[1]];
const over = (a: Complex, b: Complex): Complex => {
  const size = b[0] * b[0] + b[1] * b[1];
  return [(a[0] * b[0] + a[1] * b[1]) / size, (a[1] * b[0] - a[0] * b[1]) / size];
};
const exp = ([x, y]: Complex): Complex => [Math.exp(x) * Math.cos(y), Math.exp(x) * Math.sin(y)];
const log = ([x, y]: Complex): Complex => [Math.log(Math.hypot(x, y)), Math.atan2(y, x)];
const tanh = (a: Complex): Complex => {
  const e = exp(times([2, 0], a));
  return over(minus(e, [1, 0]), plus(e, [1, 0]));
};
const power = (a: Complex, b: Complex): Complex => exp(times(b, log(a)));
/** A whole power by products: a base below zero has no real logarithm. */
const whole = (a: Complex, n: number): Complex => (n === 0 ? [1, 0] : times(a, whole(a, n - 1)));

const binary: Record<"+" | "-" | "*" | "/" | "^", (a: Complex, b: Complex) => Complex> = {
  "+": plus,
  "-": minus,
  "*": times,
  "/": over,
  "^": (a, b) => (b[1] === 0 && Number.isInteger(b[0]) && b[0] >= 0 ? whole(a, b[0]) : power(a, b)),
};

const calls: Record<string, (a: Complex[]) => Complex> = {
  exp: ([a]) => exp(a),
  log: ([a]) => log(a),
  log10: ([a]) => over(log(a), [Math.LN10, 0]),
  sqrt: ([a]) => power(a, [0.5, 0]),
  tanh: ([a]) => tanh(a),
  abs: ([a]) => (a[0] < 0 ? times([-1, 0], a) : a),
  max: (all) => all.reduce((a, b) => (b[0] > a[0] ? b : a)),
  min: (all) => all.reduce((a, b) => (b[0] < a[0] ? b : a)),
  "step-up": ([x, at, width]) => over(plus([1, 0], tanh(over(minus(x, at), width))), [2, 0]),
};
