import { describe, expect, test } from "vitest";
import type { Fit, FittedProfile } from "../../src/fit/result.js";
import { networkOf } from "./load.js";
import { every, fitted, noisy, synthetic } from "./synthetic.js";

const vessel = (parameters: string): string => `network: n
format: 1
parameters:
${parameters}
feeds:
  feed: {flow: 10 L/min, to: tank}
compartments:
  tank: {kind: stirred, volume: tank, to: out, exchange: {corner: renewal}}
  corner: {kind: stirred, volume: corner}
outlets: [out]
`;
const parameters = (spacing: string, renewal = "1 L/min, between: [0.05 L/min, 20 L/min]"): string =>
  [
    "  tank: {value: 70 L, between: [10 L, 300 L]}",
    "  corner: {value: 20 L, between: [1 L, 200 L]}",
    `  renewal: {value: ${renewal}${spacing}}`,
  ].join("\n");

const linear = networkOf(vessel(parameters("")));
const truth = { tank: 0.08, corner: 0.03, renewal: 2e-3 / 60 };
const trialWith = (seed: number, noise: number, count = 80) => {
  const draw = noisy(seed, noise);
  return synthetic(linear, truth, {
    injection: "{at: feed, pulse: 50 g, start: 0 min, lasting: 1 min}",
    at: "out",
    times: every(1, count),
    noise: () => draw(),
  });
};
const profile = (found: Fit, name: string): FittedProfile =>
  found.profiles?.find((p) => p.name === name) as FittedProfile;
const widths = (found: Fit, name: string): number[] => {
  const { value } = found.parameters.find((p) => p.name === name) as Fit["parameters"][number];
  return profile(found, name).interval95.map((v) => Math.abs((v ?? Number.NaN) - value));
};

describe("profiles", () => {
  test("of a vessel that the data know well are the linear intervals", () => {
    const found = fitted(linear, [trialWith(1, 1e-3)], { profile: true });
    for (const { name, value, interval95 } of found.parameters) {
      widths(found, name).forEach((w, k) => {
        expect(w / Math.abs((interval95?.[k] ?? Number.NaN) - value), name).toBeCloseTo(1, 1);
      });
      expect(profile(found, name).ends).toEqual(["smooth", "smooth"]);
    }
    expect(found.findings.map((f) => f.code)).not.toContain("interval-by-profile");
  });

  test("where errors hang together, are wider as the linear intervals are", () => {
    const draw = noisy(5, 3e-4);
    let last = draw();
    const trial = synthetic(linear, truth, {
      injection: "{at: feed, pulse: 50 g, start: 0 min, lasting: 1 min}",
      at: "out",
      times: every(0.5, 240),
      noise: () => {
        last = 0.8 * last + 0.6 * draw();
        return last;
      },
    });
    const found = fitted(linear, [trial], { profile: true });
    expect(found.findings.map((f) => f.code)).toContain("residuals-correlated");
    for (const { name, value, standardError, standardErrorCorrelated, interval95 } of found.parameters) {
      expect((standardErrorCorrelated ?? 0) / (standardError ?? 1), name).toBeGreaterThan(1.5);
      widths(found, name).forEach((w, k) => {
        expect(w / Math.abs((interval95?.[k] ?? Number.NaN) - value), name).toBeCloseTo(1, 1);
      });
    }
  });

  test("do not depend on how a parameter is counted: bounds evenly or in the logarithm", () => {
    const trial = trialWith(2, 4e-3);
    const log = networkOf(vessel(parameters(", spacing: log")));
    const [a, b] = [linear, log].map((network) => fitted(network, [trial], { profile: true }));
    for (const { name } of a.parameters) {
      profile(a, name).interval95.forEach((v, k) => {
        const other = profile(b, name).interval95[k] ?? Number.NaN;
        expect(Math.abs((v ?? Number.NaN) - other), name).toBeLessThan(5e-3 * widths(a, name)[k]);
      });
    }
  });

  test("rise on both sides, from nothing at the optimum, and end at their limit", () => {
    const found = fitted(linear, [trialWith(3, 2e-3)], { profile: true });
    for (const { value, deviation, interval95 } of found.profiles ?? []) {
      for (let i = 1; i < value.length; i++) {
        expect(value[i]).toBeGreaterThan(value[i - 1]);
        expect(deviation[i]).toBeGreaterThan(deviation[i - 1]);
      }
      expect(deviation).toContain(0);
      expect(value.at(-1)).toBeCloseTo(interval95[1] ?? Number.NaN, 12);
    }
  });

  test("what a short noisy test cannot tell ends at bounds, and says so", () => {
    const found = fitted(linear, [trialWith(4, 2e-2, 12)], { profile: true });
    expect(profile(found, "corner").ends).toContain("bound");
    expect(found.findings.map((f) => f.code)).toContain("interval-by-profile");
  });
});
