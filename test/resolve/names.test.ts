import { describe, expect, test } from "vitest";
import { evaluateNames } from "../../src/compile/evaluate.js";
import type { Network } from "../../src/model/network.js";
import { formatQuantity } from "../../src/units/format.js";
import { resolved, tank } from "./vessel.js";

/** Values of all names as people see them. */
function values(network: Network): Record<string, string> {
  const env = evaluateNames(network);
  return Object.fromEntries(
    network.names.map((n) => [n.name, formatQuantity(env[n.slot], network.units.unitFor(n.value.dimension))]),
  );
}

describe("constants, parameters and feed flows", () => {
  test("use one another in any order", () => {
    const { network, problems } = resolved(
      tank(
        `constants: {bulk: total - riser, total: {value: 1 m3, about: drawing}}
parameters: {riser: {value: dwell * feed.flow, between: [1 L, total]}, dwell: {value: 15 min}}`,
        "bulk",
      ),
    );
    expect(problems).toEqual([]);
    expect(values(network)).toEqual({
      bulk: "0.85 m3",
      total: "1 m3",
      riser: "0.15 m3",
      dwell: "15 min",
      "feed.flow": "10 L/min",
    });
  });

  test("bounds may use names that are declared later", () => {
    const { network, problems } = resolved(
      tank("parameters: {a: {value: 1 L, between: [0 L, 2 * b]}, b: {value: 3 L, between: [a, 9 L]}}", "a + b"),
    );
    expect(problems).toEqual([]);
    const env = evaluateNames(network);
    expect(network.names.slice(0, 2).map((n) => n.between?.map((b) => Math.round(b.of(env) * 1e6) / 1e3))).toEqual([
      [0, 6],
      [1, 9],
    ]);
  });

  test("a value set otherwise changes all that is made of it", () => {
    const { network } = resolved(tank("constants: {a: 1 L, b: 2 * a, c: b + feed.flow * 1 min}", "c"));
    const env = evaluateNames(network, { a: 0.005, "feed.flow": 1 / 6e4 });
    expect([...env].map((x) => Math.round(x * 1e9) / 1e9)).toEqual([0.005, 0.01, 0.011, expect.any(Number)]);
  });

  test("what they say of themselves", () => {
    const { network } = resolved(
      tank("parameters: {q: {value: 1 L/min ± 10 %, between: [0.1 L/min, 10 L/min], spacing: log, about: stirring}}"),
    );
    const [q] = network.names;
    expect(q).toMatchObject({ name: "q", role: "parameter", spacing: "log", about: "stirring" });
    expect(q.value.sd?.([])).toBeCloseTo(0.1 / 6e4, 12);
  });
});

describe("circles", () => {
  test("each group is told once, with its way round; what only needs them is not told", () => {
    const { told, problems } = resolved(
      tank("constants: {a: b + 1 L, b: c, c: 2 * a, own: own / 2, other: a + own, x: y, y: 3 - x}", "other"),
    );
    expect(told).toEqual(["circular-names b + 1 L", "circular-names own / 2", "circular-names y"]);
    expect(problems.map((p) => p.message)).toEqual([
      "these values need one another in a circle: a -> b -> c -> a",
      "the value of 'own' is made of 'own' itself",
      "these values need one another in a circle: x -> y -> x",
    ]);
  });

  test("by way of a feed's flow", () => {
    const text = tank("constants: {pump: 0.5 * feed.flow}").replace("flow: 10 L/min", "flow: pump + 1 L/min");
    expect(resolved(text).problems[0].message).toContain("pump -> feed.flow -> pump");
  });
});

describe("names", () => {
  test.each(["a", "A1", "inlet-leg", "x_y", "q-", "constructor", "rest-time", "L", "min-flow"])(
    "'%s' is one",
    (name) => {
      expect(resolved(tank(`constants: {${name}: 1 L}`)).told).toEqual([]);
    },
  );
  test.each(["1a", "-a", "a b", "a.b", "ä", "a+b"])("'%s' is none", (name) => {
    expect(resolved(tank(`constants: {${name}: 1 L}`)).problems.map((p) => p.code)).toEqual(["bad-name"]);
  });
  test.each(["rest", "all", "t", "T", "pi", "gas-constant", "exp", "max", "step-up"])(
    "'%s' is a word of the language",
    (name) => {
      expect(resolved(tank(`constants: {${name}: 1 L}`)).told).toEqual([`reserved-name ${name}`]);
    },
  );
  test("a parameter may not be named like a constant, but a place may", () => {
    expect(resolved(tank("constants: {a: 1 L}\nparameters: {a: {value: 2 L}}", "a")).told).toEqual(["name-taken a"]);
    expect(resolved(tank("constants: {out: 1 L, feed: 2 L}", "out + feed")).told).toEqual([]);
  });
});
