import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Expression, namesIn } from "../../src/expressions/ast.js";
import { compileExpression, constantOf } from "../../src/expressions/compile.js";
import { isFault } from "../../src/expressions/fault.js";
import { parseComparison, parseExpression, parseValue } from "../../src/expressions/parse.js";

function expression(text: string): Expression {
  const e = parseExpression(text);
  if (isFault(e)) throw new Error(`${text}: ${JSON.stringify(e)}`);
  return e;
}

function numberFrom(text: string, names: Record<string, number> = {}): number {
  const order = Object.keys(names);
  return compileExpression(expression(text), (name) => order.indexOf(name))(Object.values(names));
}

function faultOf(text: string) {
  const v = parseValue(text);
  if (!isFault(v)) throw new Error(`${text} was taken`);
  return { code: v.code, at: text.slice(v.from, v.to), data: v.data };
}

test.each<[string, number]>([
  ["-2^2", -4],
  ["2^-1", 0.5],
  ["2^3^2", 512],
  ["2^-2^2", 2 ** -4],
  ["2 * 3^2", 18],
  ["1 - 2 - 3", -4],
  ["8 / 4 / 2", 1],
  ["8 / (4 / 2)", 4],
  ["2 + 3 * 4", 14],
  ["-3 - -3", 0],
  ["--2", 2],
  ["2*-3", -6],
  ["max(1, min(2, 3), -5)", 2],
  ["abs(-3) + sqrt(16)", 7],
  ["log(exp(2)) + log10(1000)", 5],
  ["tanh(0) + step-up(3, 3, 1)", 0.5],
  ["1.5e-3 * 2E3", 3],
  ["50 % * 4", 2],
  ["2 * pi", 2 * Math.PI],
  ["−3 + 1", -2],
  ["1 L / 2 L", 0.5],
  [".5", 0.5],
  ["0.05", 0.05],
])("%s = %d", (text, x) => expect(numberFrom(text)).toBeCloseTo(x, 14));

test("a power binds tighter than a product: k*A^2", () => {
  expect(numberFrom("k*A^2", { k: 3, A: 5 })).toBe(75);
  expect(numberFrom("-A^2", { A: 5 })).toBe(-25);
});

test("hyphens and dots belong to names, a minus has spaces", () => {
  expect(namesIn(expression("inlet-leg - tank-1.volume + chain.2 * T"))).toEqual([
    "inlet-leg",
    "tank-1.volume",
    "chain.2",
    "T",
  ]);
});

test("units stand after numbers, in SI", () => {
  expect(numberFrom("10 L/min * 6 min")).toBeCloseTo(0.001 * 60, 16);
  expect(numberFrom("40 W/(m2 K) * 2 m2")).toBe(80);
  expect(numberFrom("90 1/min")).toBe(1.5);
  expect(numberFrom("3 L*2")).toBeCloseTo(0.006, 16);
  expect(numberFrom("35 degC")).toBeCloseTo(308.15, 12);
  expect(numberFrom("-5 degC")).toBeCloseTo(268.15, 12);
  expect(numberFrom("(2 m) ^ 3")).toBe(8);
  expect(numberFrom("2 m^3")).toBe(2);
  expect(numberFrom("gas-constant * 300 K")).toBeCloseTo(2494.338785445972, 9);
});

describe("uncertainty", () => {
  test.each<[string, "absolute" | "relative", number]>([
    ["1000 L ± 20 L", "absolute", 0.02],
    ["1000 L +/- 20 L", "absolute", 0.02],
    ["1000 L ± 2 %", "relative", 0.02],
    ["10 % ± 2 %", "absolute", 0.02],
    ["(10 %) ± 2 %", "absolute", 0.02],
    ["5 ppm ± 2 %", "relative", 0.02],
    ["3 ± 2 %", "relative", 0.02],
    ["3 ± 0.5", "absolute", 0.5],
    ["a * b ± 2 %", "relative", 0.02],
    ["35 degC ± 1 K", "absolute", 1],
  ])("%s is %s", (text, kind, value) => {
    const v = parseValue(text);
    if (isFault(v)) throw new Error(JSON.stringify(v));
    expect(v.uncertainty?.kind).toBe(kind);
    expect(v.uncertainty?.value).toBeCloseTo(value, 15);
  });

  test.each([
    "35 degC ± 1 degC",
    "35 degC ± 1 %",
    "2 L ±",
    "2 L ± x",
    "2 L ± -1 L",
    "2 ± 1 ± 1",
    "5 L +- 1 L",
    "5 L -+ 1 L",
  ])("%s is refused", (text) => expect(faultOf(text).code).toBe("bad-uncertainty"));

  test("a rate law has none", () => expect(parseExpression("k * A ± 2 %")).toMatchObject({ code: "bad-expression" }));
});

describe("numbers are plain decimals", () => {
  test.each<[string, string, string]>([
    ["010 L", "010", "write 10"],
    ["00.5 L", "00.5", "write 0.5"],
    ["0x10", "0x10", "write 16"],
    ["0b11", "0b11", "write 3"],
    ["1_000 L", "1_000", "write 1000"],
    ["1,5 L", "1,5", "write 1.5"],
    ["1,000 L", "1,000", "write 1.000 or 1000"],
    ["1 000 L", "1 000", "write 1000"],
    ["1'000 L", "1'000", "write 1000"],
    ["5. L", "5.", "write 5"],
    ["1.2.3", "1.2.3", "write one decimal point"],
    [".inf", ".inf", "write a number"],
    ["2 * .NaN", ".NaN", "write a number"],
    ["inf", "inf", "write a number"],
    ["1e999", "1e999", "write a number below 1e308"],
  ])("%s", (text, at, fix) => expect(faultOf(text)).toMatchObject({ code: "bad-number", at, data: { fix } }));
});

test.each<[string, string, string]>([
  ["10L/min", "space-before-unit", "10L/min"],
  ["2 * 10% + 1", "space-before-unit", "10%"],
  ["10 l/Min", "unknown-unit", "Min"],
  ["2 total", "unknown-unit", "total"],
  ["3 %%", "bad-unit", "%%"],
  ["10 L^/min", "bad-unit", "L^/min"],
  ["10 L^n", "bad-unit", "L^n"],
  ["1 + 3 W/m2/degC", "offset-unit", "degC"],
  ["5 degC/min", "offset-unit", "degC"],
  ["1 L + 2 m ^ 3", "bad-power", "2 m ^ 3"],
  ["2 m ^n", "bad-power", "2 m ^n"],
  ["a +", "bad-expression", ""],
  ["(a + b", "bad-expression", "("],
  ["a + b)", "bad-expression", ")"],
  ["a b", "bad-expression", "b"],
  ["a $ b", "bad-expression", "$"],
  ["a * * b", "bad-expression", "*"],
  ["max", "bad-expression", "max"],
  ["10 L/ min", "bad-expression", "min"],
  ["sqrt(a, b)", "bad-expression", "sqrt(a, b)"],
  ["step-up(a, b)", "bad-expression", "step-up(a, b)"],
  ["2 * sqroot(a)", "unknown-function", "sqroot"],
  ["constructor(a)", "unknown-function", "constructor"],
  ["of-the-largest(a, b)", "unknown-function", "of-the-largest"],
  ["", "bad-expression", ""],
])("'%s' is %s at '%s'", (text, code, at) => expect(faultOf(text)).toMatchObject({ code, at }));

test("a comparison has two sides and an order", () => {
  expect(parseComparison("riser + stagnant <= total")).toMatchObject({ operator: "<=", right: { name: "total" } });
  expect(parseComparison("riser")).toMatchObject({ code: "bad-expression" });
});

test("deep brackets are a fault, not a crash", () => {
  expect(faultOf(`${"(".repeat(5000)}1`).code).toBe("bad-expression");
  expect(faultOf(`${"-".repeat(5000)}1`).code).toBe("bad-expression");
});

test("any text gives a value or a fault inside the text", () =>
  fc.assert(
    fc.property(fc.string({ unit: fc.constantFrom(..."ab1.0e, +-*/^()±%LmK<> °µ_x") }), (text) => {
      const v = parseValue(text);
      if (!isFault(v)) return;
      expect(v.from).toBeGreaterThanOrEqual(0);
      expect(v.to).toBeLessThanOrEqual(text.length);
      expect(v.from).toBeLessThanOrEqual(v.to);
    }),
    { numRuns: 2000 },
  ));

test("numbers without names fold to constants", () => {
  expect(constantOf(expression("2 * (3 + 4)"))).toBe(14);
  expect(constantOf(expression("2 * a"))).toBeUndefined();
});
