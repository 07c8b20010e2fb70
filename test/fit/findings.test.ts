import { describe, expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import type { Network } from "../../src/model/network.js";
import { networkOf } from "./load.js";
import { every, fitted, noisy, parameterOf, synthetic } from "./synthetic.js";

const line = (parameters: string, volume: string, more = ""): Network =>
  networkOf(`network: Tube and tank
format: 1
parameters: ${parameters}
${more}feeds: {feed: {flow: 10 L/min, to: leg}}
compartments:
  leg: {kind: tubular, volume: 20 L, to: bulk}
  bulk:
    kind: stirred
    volume: ${volume}
    to: after
  after: {kind: stirred, volume: last, to: out}
outlets: [out]
`);
const trialFor = (network: Network, truth: Record<string, number>, at = "out", reading: string[] = []) =>
  synthetic(network, truth, {
    injection: "{at: feed, pulse: 50 g, lasting: 0.5 min}",
    at,
    times: every(0.8, 60),
    noise: noisy(4, 0.002),
    reading,
  });

describe("what a fit must say", () => {
  test("a sum of two volumes: the data cannot tell one from the other", () => {
    const network = line(
      "{a: {value: 30 L, between: [1 L, 200 L]}, b: {value: 50 L, between: [1 L, 200 L]}, last: {value: 5 L, between: [1 L, 40 L]}}",
      "a + b",
    );
    const found = fitted(network, [trialFor(network, { a: 0.04, b: 0.05, last: 0.008 })]);
    const finding = found.findings.find((f) => f.code === "cannot-tell");
    expect([...(finding?.about ?? [])].sort()).toEqual(["a", "b"]);
    expect(finding?.message).toMatch(/cannot tell (a from b|b from a)/);
    expect(parameterOf(found, "a").standardError).toBeUndefined();
    expect(parameterOf(found, "a").interval95).toEqual([1e-3, 0.2]);
    expect(parameterOf(found, "last").standardError).toBeGreaterThan(0);
    expect(parameterOf(found, "a").value + parameterOf(found, "b").value).toBeCloseTo(0.09, 3);
  });

  test("a tank below the probe: the data say nothing about it", () => {
    const network = line("{a: {value: 30 L, between: [1 L, 200 L]}, last: {value: 5 L, between: [1 L, 40 L]}}", "a");
    const found = fitted(network, [trialFor(network, { a: 0.09, last: 0.008 }, "bulk")]);
    const finding = found.findings.find((f) => f.code === "cannot-tell");
    expect(finding?.message).toContain("say nothing about last");
    expect(found.converged).toBe(true);
    expect(parameterOf(found, "a").value).toBeCloseTo(0.09, 3);
  });

  test("dose and volume of one tank at one scale: scale is named where it takes part", () => {
    const network = line("{last: {value: 5 L, between: [1 L, 40 L]}}", "50 L");
    const found = fitted(network, [trialFor(network, { last: 0.02 }, "out", ["scale: free", "baseline: constant"])]);
    expect(found.freeParameters).toBe(3);
    const { scale, offset } = found.nuisance["Synthetic/out"];
    expect(Math.abs((scale?.value ?? NaN) - 1) / (scale?.standardError ?? NaN)).toBeLessThan(3);
    expect(Math.abs(offset?.value ?? NaN) / (offset?.standardError ?? NaN)).toBeLessThan(3);
  });

  test("a truth outside the bounds ends at the bound, and is said", () => {
    const network = line("{a: {value: 30 L, between: [1 L, 60 L]}, last: {value: 5 L, between: [1 L, 40 L]}}", "a");
    const found = fitted(network, [trialFor(network, { a: 0.09, last: 0.008 })]);
    expect(parameterOf(found, "a").atBound).toBe("upper");
    expect(parameterOf(found, "a").value).toBe(0.06);
    const finding = found.findings.find((f) => f.code === "parameter-at-bound");
    expect(finding?.message).toContain("a ended at its upper bound, 60 L");
  });

  test("`requires:` holds through the fit", () => {
    const network = line(
      "{a: {value: 30 L, between: [1 L, 200 L]}, last: {value: 5 L, between: [1 L, 40 L]}}",
      "a",
      "requires: [a + last < 60 L]\n",
    );
    const free = line("{a: {value: 30 L, between: [1 L, 200 L]}, last: {value: 5 L, between: [1 L, 40 L]}}", "a");
    const found = fitted(network, [trialFor(free, { a: 0.09, last: 0.008 })]);
    expect(parameterOf(found, "a").value + parameterOf(found, "last").value).toBeLessThanOrEqual(0.06);
  });

  test("a fit that is stopped gives its best so far, marked", () => {
    const network = line("{a: {value: 30 L, between: [1 L, 200 L]}, last: {value: 5 L, between: [1 L, 40 L]}}", "a");
    let seen = 0;
    const found = fitted(network, [trialFor(network, { a: 0.09, last: 0.008 })], {
      progress: () => {
        seen++;
      },
      cancelled: () => seen >= 2,
    });
    expect(seen).toBe(2);
    expect(found.converged).toBe(false);
    expect(found.stopped).toBe("cancelled");
    expect(found.findings[0].code).toBe("fit-cancelled");
    expect(parameterOf(found, "a").value).toBeGreaterThan(0.05);
  });

  test("what cannot start is a problem, not an exception", () => {
    const network = line("{a: {value: 30 L, between: [1 L, 200 L]}, last: {value: 5 L, between: [1 L, 40 L]}}", "a");
    const trial = trialFor(network, { a: 0.09, last: 0.008 });
    const codes = (trials: Parameters<typeof fit>[1], free?: string[]): string[] =>
      fit(network, trials, free ? { free } : {}).problems.map((p) => p.code);
    expect(codes([])).toEqual(["no-points"]);
    expect(codes([trial], ["a", "lst"])).toEqual(["unknown-free"]);
    expect(fit(network, [trial], { free: ["lst"] }).problems[0].message).toContain("did you mean 'last'?");
    expect(codes([trial], [])).toEqual(["nothing-to-fit"]);
  });

  test("parameters that are not freed stay at their value", () => {
    const network = line("{a: {value: 90 L, between: [1 L, 200 L]}, last: {value: 5 L, between: [1 L, 40 L]}}", "a");
    const found = fitted(network, [trialFor(network, { a: 0.09, last: 0.008 })], { free: ["last"] });
    expect(found.parameters.map((p) => p.name)).toEqual(["last"]);
    expect(parameterOf(found, "last").value).toBeCloseTo(0.008, 3);
  });

  test("hopeless data end in words, never in an exception", () => {
    const network = line("{a: {value: 30 L, between: [1 L, 200 L]}, last: {value: 5 L, between: [1 L, 40 L]}}", "a");
    const of = (value: (truth: number) => number, reading: string[] = []) =>
      fitted(
        network,
        [
          synthetic(
            network,
            { a: 0.09, last: 0.008 },
            {
              injection: "{at: feed, pulse: 50 g}",
              at: "out",
              times: every(2, 20),
              noise: (_, c) => value(c) - c,
              reading,
            },
          ),
        ],
        { starts: 4 },
      );
    const upside = of((c) => 0.5 - c, ["scale: free", "baseline: constant"]);
    expect(upside.findings.map((f) => f.code)).toContain("scale-not-positive");
  });

  test("a trial of another vessel is a problem with its place", () => {
    const network = line("{last: {value: 5 L, between: [1 L, 40 L]}}", "50 L");
    const trial = trialFor(network, { last: 0.02 });
    const lost = {
      ...trial,
      readings: trial.readings.map((r) => ({
        ...r,
        at: "outt",
        places: r.places.map((p) => ({ ...p, name: "outt" })),
      })),
    };
    expect(fit(network, [lost]).problems.map((p) => p.code)).toEqual(["unknown-place"]);
  });
});
