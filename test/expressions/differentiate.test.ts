import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Expression, visit } from "../../src/expressions/ast.js";
import { compileExpression } from "../../src/expressions/compile.js";
import { differentiate } from "../../src/expressions/differentiate.js";
import { isFault } from "../../src/expressions/fault.js";
import { parseExpression } from "../../src/expressions/parse.js";
import { complexStep } from "./complex-step.js";

const names = ["x", "y", "z"];
const compile = (e: Expression) => compileExpression(e, (name) => names.indexOf(name));

function expression(text: string): Expression {
  const e = parseExpression(text);
  if (isFault(e)) throw new Error(`${text}: ${JSON.stringify(e)}`);
  return e;
}

/** Smooth expressions of names between 0.5 and 1.5 whose arguments stay where every function is analytic nearby. */
const smooth: fc.Arbitrary<string> = fc.letrec<{ all: string }>((tie) => ({
  all: fc.oneof(
    { depthSize: "small", withCrossShrink: true },
    fc.constantFrom("x", "y", "z", "2", "0.7", "pi"),
    fc.tuple(tie("all"), fc.constantFrom("+", "-", "*"), tie("all")).map(([a, op, b]) => `(${a} ${op} ${b})`),
    fc.tuple(tie("all"), tie("all")).map(([a, b]) => `(${a}) / (2 + tanh(${b}))`),
    fc.tuple(tie("all"), tie("all")).map(([a, b]) => `(2 + tanh(${a}))^(tanh(${b}))`),
    tie("all").map((a) => `(2 + tanh(${a}))^2.5`),
    tie("all").map((a) => `-tanh(${a})^3`),
    tie("all").map((a) => `exp(tanh(${a}))`),
    tie("all").map((a) => `log(3 + tanh(${a}))`),
    tie("all").map((a) => `log10(3 + tanh(${a}))`),
    tie("all").map((a) => `sqrt(3 + tanh(${a}))`),
    fc.tuple(tie("all"), tie("all")).map(([a, b]) => `step-up(tanh(${a}), 0.2 * tanh(${b}), 2)`),
    fc.tuple(tie("all"), tie("all")).map(([a, b]) => `max(tanh(${a}), 5 + tanh(${b}))`),
    fc.tuple(tie("all"), tie("all")).map(([a, b]) => `min(tanh(${a}), 5 + tanh(${b}))`),
    tie("all").map((a) => `abs(tanh(${a}) - 3)`),
  ),
})).all;

const point = fc.tuple(...names.map(() => fc.double({ min: 0.5, max: 1.5, noNaN: true })));

test("the derivative of any expression meets a complex step to 1e-12", () =>
  fc.assert(
    fc.property(smooth, point, (text, env) => {
      const e = expression(text);
      for (const name of names) {
        const exact = complexStep(e, names, env, name);
        const error = Math.abs(compile(differentiate(e, name))(env) - exact);
        expect(error).toBeLessThan(1e-12 * Math.max(1, Math.abs(exact), Math.abs(compile(e)(env))));
      }
    }),
    { numRuns: 400 },
  ));

describe("known derivatives", () => {
  test.each<[string, string, number[], number]>([
    ["x^3", "x", [2, 0, 0], 12],
    ["x^1", "x", [0, 0, 0], 1],
    ["x^2", "x", [0, 0, 0], 0],
    ["2^x", "x", [3, 0, 0], 8 * Math.LN2],
    ["x^x", "x", [2, 0, 0], 4 * (Math.LN2 + 1)],
    ["1 / x", "x", [4, 0, 0], -1 / 16],
    ["exp(-x / y)", "y", [1, 2, 0], Math.exp(-0.5) / 4],
    ["tanh(x)", "x", [20, 0, 0], 4 * Math.exp(-40)],
    ["step-up(x, 1, 2)", "x", [1, 0, 0], 0.25],
    ["max(x, y)", "x", [1, 2, 0], 0],
    ["min(x, y, z)", "x", [1, 2, 3], 1],
  ])("d(%s)/d%s", (text, name, env, slope) => {
    const got = compile(differentiate(expression(text), name))(env);
    expect(Math.abs(got - slope)).toBeLessThanOrEqual(1e-14 * Math.abs(slope));
  });

  test("at a kink the slope is that of a growing argument", () => {
    const slope = (text: string, env: number[]) => compile(differentiate(expression(text), "x"))(env);
    expect(slope("abs(x)", [0, 0, 0])).toBe(1);
    expect(slope("max(x, 0)", [0, 0, 0])).toBe(1);
    expect(slope("min(x, 0)", [0, 0, 0])).toBe(0);
    expect(slope("abs(x)", [-2, 0, 0])).toBe(-1);
  });
});

test("what does not depend on a name has derivative zero, as a plain number", () => {
  expect(differentiate(expression("y * exp(z) + max(y, 2)"), "x")).toMatchObject({ type: "number", value: 0 });
});

test("derivatives stay small: a linear expression gives a constant or a name", () => {
  const nodes = (e: Expression): number => {
    let n = 0;
    visit(e, () => n++);
    return n;
  };
  expect(nodes(differentiate(expression("3 * x + y * x - z"), "x"))).toBeLessThanOrEqual(3);
  expect(nodes(differentiate(expression("y - x - z"), "x"))).toBe(1);
});
