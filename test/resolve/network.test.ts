import { describe, expect, test } from "vitest";
import { evaluateNames } from "../../src/compile/evaluate.js";
import { dimensions } from "../../src/units/dimension.js";
import { resolved, tank } from "./vessel.js";

describe("streams", () => {
  const streams = (to: string) => {
    const { network, told } = resolved(tank("constants: {q: 4 L/min, x: 30 %}").replace("to: out", `to: ${to}`));
    return told.length > 0 ? told : network.compartments[0].streams.map((s) => `${s.to}: ${s.split.is}`);
  };
  test.each([
    ["out", ["out: all"]],
    ["{b: 30 %, out: rest}", ["b: share", "out: rest"]],
    ["{b: 0.3, out: 0.7}", ["b: share", "out: share"]],
    ["{b: q, out: rest}", ["b: flow", "out: rest"]],
    ["{b: x * q, c: 1 - x, out: rest}", ["b: flow", "c: share", "out: rest"]],
    ["{b: 3 L, out: rest}", ["wrong-dimension 3 L"]],
    ["{b: 3, c: 1 kg, out: rest}", ["wrong-dimension 1 kg"]],
    ['{b: "30 %", out: "rest"}', ["b: share", "out: rest"]],
  ])("%s", (to, expected) => {
    expect(streams(to)).toEqual(expected);
  });
});

describe("requirements", () => {
  const slack = (text: string, a: number, b: number) => {
    const { network, told } = resolved(tank("constants: {a: 1 L, b: 1 L}", "a + b", `requires: ["${text}"]\n`));
    if (told.length > 0) return told;
    return Math.sign(network.requires[0].slack(evaluateNames(network, { a, b })));
  };
  test.each([
    ["a < b", 1, 2, 1],
    ["a < b", 2, 1, -1],
    ["a < b", 1, 1, 0],
    ["a <= b", 1, 1, 1],
    ["a >= b", 1, 1, 1],
    ["a > b", 2, 1, 1],
    ["a>b", 1, 2, -1],
    ["2 * a + 1 m3 <= b", 1, 3, 1],
  ])("%s at %d, %d", (text, a, b, sign) => {
    expect(slack(text, a, b)).toBe(sign);
  });
  test.each([
    ["a = b", "bad-requirement"],
    ["a < b < 1 L", "bad-requirement"],
    ["< b", "bad-requirement"],
    ["a <", "bad-requirement"],
    ["a < 3 kg", "wrong-dimension"],
    ["a < c", "unknown-name"],
    ["a < 1 +", "bad-expression"],
  ])("'%s' is none: %s", (text, code) => {
    expect(String(slack(text, 1, 1))).toContain(code);
  });
});

describe("checks", () => {
  test("what must be, and how near", () => {
    const { network, problems } = resolved(
      tank(
        "constants: {v: 1 L}",
        "v",
        "checks:\n  - {volume: a, equals: v}\n  - {mean-time: out, equals: 6 s, within: 2 %}\n",
      ),
    );
    expect(problems).toEqual([]);
    expect(network.checks).toMatchObject([
      { what: "volume", of: "a", within: 0.001 },
      { what: "mean-time", of: "out", within: 0.02 },
    ]);
    expect(network.used.has("v")).toBe(true);
  });
  test("of the right kind", () => {
    const { told } = resolved(
      tank("", "1 L", "checks: [{volume: a, equals: 3 min}, {flow: a, equals: 1 L/min, within: v}]\n"),
    );
    expect(told).toEqual(["wrong-dimension 3 min", "unknown-name v"]);
  });
});

test("results are printed in the units that the file uses first, else in usual ones", () => {
  const { network } = resolved(tank("constants: {v: 2 m3, w: 1 L}", "v + w").replace("10 L/min", "1.2 m3/h"));
  const unit = (d: keyof typeof dimensions) => network.units.unitFor(dimensions[d]).name;
  expect([unit("volume"), unit("flow"), unit("ratio"), unit("mass concentration")]).toEqual(["m3", "m3/h", "%", "g/L"]);
  expect(network.units.time.name).toBe("h");
  expect(resolved(tank("").replace("10 L/min", "2 MGD")).network.units.time.name).toBe("d");
});

test("what is used: in volumes, streams, exchanges, bounds, requirements and other values", () => {
  const text = `network: A tank
format: 1
constants: {a: 1 L, b: 10 %, c: 1 L/min, d: 3 L, e: 9 L, f: 10 L/min, idle: 1 L}
parameters: {p: {value: 2 * a, between: [0 L, d]}}
requires: [p < e]
feeds: {feed: {flow: f, to: {x: rest, out: b}}}
compartments:
  x: {kind: stirred, volume: p, to: out, exchange: {y: c}}
  y: {kind: stirred, volume: 1 L}
outlets: [out]
`;
  expect([...resolved(text).network.used].sort()).toEqual(["a", "b", "c", "d", "e", "f", "p"]);
});
