import { describe, expect, test } from "vitest";
import type { Network } from "../../src/model/network.js";
import { nestedTests } from "../../src/study/nested.js";
import { networkOf } from "../fit/load.js";
import { every, fitted, noisy, synthetic } from "../fit/synthetic.js";

const network = (title: string, parameters: string, feed: string, more = ""): Network =>
  networkOf(`network: ${title}
format: 1
parameters:
  size: {value: 90 L, between: [10 L, 400 L]}
${parameters}feeds:
  feed: {flow: 10 L/min, to: ${feed}}
compartments:
  tank: {kind: stirred, volume: size, to: out}
${more}outlets: [out]
`);

const tank = network("Tank", "", "tank");
const bypass = network("Bypass", "  slip: {value: 10 %, between: [0 %, 60 %]}\n", "{out: slip, tank: rest}");
const tube = network(
  "Tube",
  "  pipe: {value: 20 L, between: [10 L, 60 L]}\n",
  "pipe",
  "  pipe: {kind: tubular, volume: pipe, to: tank}\n",
);

const trial = (seed: number, of: Network, truth: Record<string, number>) =>
  synthetic(of, truth, {
    injection: "{at: feed, pulse: 50 g, lasting: 1 min}",
    at: "out",
    times: every(0.5, 80),
    noise: noisy(seed, 0.004),
  });

function tested(rivals: readonly Network[], of: ReturnType<typeof trial>) {
  const all = rivals.map((n) => ({ title: n.title, network: n, fit: fitted(n, [of]) }));
  return nestedTests(all, [of], 1);
}

describe("rivals that are special cases of others", () => {
  test("are found, and told apart where the data ask for more", () => {
    const [only, ...others] = tested([bypass, tank, tube], trial(1, bypass, { size: 0.1, slip: 0.1 }));
    expect(others).toEqual([]);
    expect(only).toMatchObject({ special: "Tank", general: "Bypass", freedom: [1, 78], atBound: true });
    expect(only.p).toBeLessThan(1e-6);
    // F by hand: the drop of the sum of squares over the variance that is left.
    const [one, two] = [tank, bypass].map((n) => fitted(n, [trial(1, bypass, { size: 0.1, slip: 0.1 })]));
    const f = (one.residualSumOfSquares - two.residualSumOfSquares) / (two.residualSumOfSquares / 78);
    expect(only.f / f).toBeCloseTo(1, 6);
  });

  test("of which the simpler is true are seldom rejected", () => {
    const rejected = Array.from({ length: 40 }, (_, k) => tested([tank, bypass], trial(50 + k, tank, { size: 0.1 })));
    expect(rejected.every((r) => r.length === 1)).toBe(true);
    // At a bound 2.5 % of them; more than 4 of 40 has a probability of 0.3 %.
    expect(rejected.filter(([r]) => r.p < 0.05).length).toBeLessThan(5);
  });
});
