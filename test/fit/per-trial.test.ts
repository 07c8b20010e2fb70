import { describe, expect, test } from "vitest";
import { bootstrapOf } from "../../src/fit/bootstrap.js";
import { refitsOf } from "../../src/fit/resample.js";
import { networkOf } from "./load.js";
import { every, fitted, noisy, parameterOf, synthetic } from "./synthetic.js";

const vessel = (per: string, held = "") =>
  networkOf(`network: Tank beside a valve that leaks as it likes
format: 1
parameters:
  size: {value: 80 L, between: [20 L, 300 L]}
  leak: {value: 10 %${held}, between: [0 %, 60 %]${per}}
feeds:
  feed: {flow: 10 L/min, to: {out: leak, tank: rest}}
compartments:
  tank: {kind: stirred, volume: size, to: out}
outlets: [out]
`);

const plain = vessel("");
const own = vessel(", per: trial");
const day = (title: string, leak: number, seed: number, sd = 0.004) =>
  synthetic(
    plain,
    { size: 0.1, leak },
    {
      title,
      injection: "{at: feed, pulse: 50 g, lasting: 1 min}",
      at: "out",
      times: every(0.5, 80),
      noise: noisy(seed, sd),
    },
  );
const trials = [day("Monday", 0.05, 1), day("Friday", 0.25, 2)];

describe("a parameter with a value of its own in each trial", () => {
  const found = fitted(own, trials);

  test("has one estimate in each, and the shared ones are known from all", () => {
    expect(found.parameters.map((p) => p.name)).toEqual(["size", "Monday/leak", "Friday/leak"]);
    expect(found.freeParameters).toBe(3);
    for (const [name, truth] of [
      ["size", 0.1],
      ["Monday/leak", 0.05],
      ["Friday/leak", 0.25],
    ] as const) {
      const { value, standardError } = parameterOf(found, name);
      expect(Math.abs(value - truth) / (standardError ?? NaN)).toBeLessThan(3.5);
    }
    expect(parameterOf(found, "Friday/leak").ofTrial).toEqual({ name: "leak", trial: "Friday" });
    const alone = fitted(plain, [trials[0]]);
    expect(parameterOf(found, "size").standardError).toBeLessThan(parameterOf(alone, "size").standardError ?? 0);
  });

  test("fits what one shared value cannot, by AICc", () => {
    expect(found.aicc).toBeLessThan(fitted(plain, trials).aicc - 100);
  });

  // Nothing is shared then: the sums of squares and errors (with the variance of each) are those of fits of their own.
  test("where all are so, is as many fits as there are trials", () => {
    const all = networkOf(
      `network: All its own
format: 1
parameters: {size: {value: 80 L, between: [20 L, 300 L], per: trial}}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: size, to: out}}
outlets: [out]
`,
    );
    const make = (title: string, seed: number) =>
      synthetic(
        all,
        { size: 0.1 },
        { title, injection: "{at: feed, pulse: 50 g}", at: "out", times: every(0.5, 60), noise: noisy(seed, 0.004) },
      );
    const two = [make("A", 5), make("B", 6)];
    const together = fitted(all, two);
    const apart = two.map((t) => fitted(all, [t]));
    const sum = apart.reduce((s, f) => s + f.residualSumOfSquares, 0);
    expect(together.residualSumOfSquares / sum).toBeCloseTo(1, 10);
    expect(parameterOf(together, "A/size").value).toBeCloseTo(parameterOf(apart[0], "size").value, 8);
    expect(parameterOf(together, "B/size").value).toBeCloseTo(parameterOf(apart[1], "size").value, 8);
    expect(together.correlation.rows[0][1]).toBeCloseTo(0, 10);
  });

  test("the order of the trials leaves every estimate alone", () => {
    const turned = fitted(own, [trials[1], trials[0]]);
    for (const p of found.parameters) {
      expect(parameterOf(turned, p.name).value / p.value).toBeCloseTo(1, 7);
      expect((parameterOf(turned, p.name).standardError ?? NaN) / (p.standardError ?? NaN)).toBeCloseTo(1, 5);
    }
  });

  test("of one trial alone is any other parameter", () => {
    expect(fitted(own, [trials[0]]).parameters.map((p) => p.name)).toEqual(["size", "leak"]);
  });

  test("trials of one title are told apart", () => {
    const twins = fitted(own, [day("Test", 0.05, 1), day("Test", 0.25, 2)]);
    expect(twins.parameters.map((p) => p.name)).toEqual(["size", "Test/leak", "Test (2)/leak"]);
  });

  test("a ± holds each of them", () => {
    const held = fitted(vessel(", per: trial", " ± 0.1 %"), trials);
    expect(Math.abs(parameterOf(held, "Monday/leak").value - 0.1)).toBeLessThan(0.02);
    expect(Math.abs(parameterOf(held, "Friday/leak").value - 0.1)).toBeLessThan(0.02);
  });

  test("profiles and bootstrap go by the same names and widths", () => {
    const profiled = fitted(own, trials, { profile: true });
    expect(profiled.profiles?.map((p) => p.name)).toEqual(profiled.parameters.map((p) => p.name));
    const again = refitsOf(own, trials, { values: profiled.values, seed: 1 });
    const rows = Array.from({ length: 60 }, (_, r) => again?.refit(r));
    const { parameters } = bootstrapOf(profiled, 60, again as NonNullable<typeof again>, rows);
    for (const p of parameters) {
      const se = parameterOf(profiled, p.name).standardError ?? NaN;
      expect(Math.abs(p.standardError / se - 1)).toBeLessThan(0.4);
    }
  });
});
