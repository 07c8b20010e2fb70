import { describe, expect, test } from "vitest";
import { candidatesFor } from "../../src/plan/candidates.js";
import { furtherTests } from "../../src/plan/further.js";
import { networkOf } from "../fit/load.js";
import { every, fitted, noisy, parameterOf, synthetic } from "../fit/synthetic.js";

const two = networkOf(`network: Two tanks in series
format: 1
parameters:
  first: {value: 25 L, between: [5 L, 200 L]}
  second: {value: 80 L, between: [5 L, 200 L]}
feeds: {feed: {flow: 10 L/min, to: one}}
compartments:
  one: {kind: stirred, volume: first, to: two}
  two: {kind: stirred, volume: second, to: out}
outlets: [out]
`);

const corner = networkOf(`network: A corner that a stirrer renews
format: 1
constants: {total: 100 L, speed: 60 1/min}
parameters:
  corner: {value: 25 L, between: [1 L, 80 L]}
  renewal: {value: 0.03 L, between: [0.001 L, 1 L], spacing: log, about: liquid renewed per turn}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments:
  bulk:
    kind: stirred
    volume: total - corner
    to: out
    exchange: {corner: renewal * speed}
  corner: {kind: stirred, volume: corner}
outlets: [out]
`);

describe("what further test would tell", () => {
  test("two tanks whose order no outlet shows: a probe between them, and what it promises is what it gives", () => {
    const at = { injection: "{at: feed, pulse: 50 g}", at: "out", times: every(1, 60) };
    const truth = { first: 0.045, second: 0.055 };
    const trial = synthetic(two, truth, { ...at, noise: noisy(1, 0.003) });
    const fit = fitted(two, [trial]);
    const [best, ...others] = furtherTests(two, [trial], fit);
    expect(best.says).toBe("the same test with a calibrated probe in 'one' too");
    expect(best.remains).toBeLessThan(0.5);
    for (const o of others) expect(o.remains).toBeGreaterThanOrEqual(best.remains);
    const probe = synthetic(two, truth, { ...at, title: "Probe", at: "one", noise: noisy(2, 0.003) });
    const outlet = synthetic(two, truth, { ...at, title: "Again", noise: noisy(3, 0.003) });
    const after = fitted(two, [trial, outlet, probe]);
    for (const p of best.parameters) {
      const [low, high] = parameterOf(after, p.name).interval95 ?? [0, 1];
      const [a, b] = p.after ?? [0, 1];
      expect((high - low) / (b - a)).toBeGreaterThan(0.6);
      expect((high - low) / (b - a)).toBeLessThan(1.6);
    }
  });

  test("what a stirrer renews: other speeds and flows are among them, and are told by name", () => {
    const trial = synthetic(
      corner,
      { corner: 0.03, renewal: 3e-5 },
      { injection: "{at: feed, pulse: 50 g}", at: "out", times: every(0.5, 60), noise: noisy(1, 0.004) },
    );
    const fit = fitted(corner, [trial]);
    const tests = furtherTests(corner, [trial], fit, ["corner", "renewal"]);
    const said = tests.map((t) => t.says);
    expect(said).toContain("a test with speed at 30 1/min");
    expect(said).toContain("a test at half the flow (feed 5 L/min)");
    expect(said).toContain("the same test, read twice as long");
    const again = tests.find((t) => t.sort === "again");
    // Twice the information: 1 / sqrt(2) of the width.
    expect(again?.remains).toBeGreaterThan(0.69);
    expect(again?.remains).toBeLessThan(0.76);
    expect(tests.filter((t) => t.remains < (again?.remains ?? 0)).length).toBeGreaterThan(0);
  });

  test("a flow that was tested already is not proposed again", () => {
    const truth = { corner: 0.03, renewal: 3e-5 };
    const at = { injection: "{at: feed, pulse: 50 g}", at: "out", times: every(1, 60), noise: noisy(1, 0.004) };
    const slow = synthetic(corner, truth, { ...at, title: "Slow", flows: "{feed: 5 L/min}" });
    const usual = synthetic(corner, truth, { ...at, title: "Usual" });
    const flows = (trials: (typeof usual)[]) =>
      candidatesFor(corner, trials, { values: truth, readings: [] })
        .filter((c) => c.sort === "flow")
        .map((c) => c.says);
    expect(flows([slow, usual])).toEqual(["a test at twice the flow (feed 20 L/min)"]);
    expect(flows([usual, slow])).toEqual(["a test at half the flow (feed 2.5 L/min)"]);
  });
});
