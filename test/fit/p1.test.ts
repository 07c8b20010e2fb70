import { describe, expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import { networkAt, trialAt } from "./load.js";

// Reference: 47 starts of an independent closed-form model with central differences, 15 of which reach this optimum and agree
// to 2e-6 of a standard error. Units: -, L, L, L/min, g/L, g/L/min.
const reference = {
  ssr: 7.385123385e-5,
  bypass: [0.120018348, 2.681e-4, 1],
  riser: [148.60996, 7.196, 1e-3],
  stagnant: [252.37775, 12.8, 1e-3],
  renewal: [1.4546996, 0.1249, 1e-3 / 60],
} as const;
const offset = [1.9510963e-3, 2.625e-4, 1] as const;
const drift = [2.1802955e-6, 5.46e-7, 1 / 60] as const;

describe("bypass, tube and quiet corner from the case's own start values", () => {
  const network = networkAt("test/fit/p1/p1.yaml");
  const trial = trialAt("test/fit/p1/p1-pulse.yaml");
  const { fit: found } = fit(network, [trial]);
  if (!found) throw new Error("no fit");

  test("reaches the global optimum", () => {
    expect(found.converged).toBe(true);
    expect(Math.abs(found.residualSumOfSquares / reference.ssr - 1)).toBeLessThan(1e-8);
    for (const name of ["bypass", "riser", "stagnant", "renewal"] as const) {
      const [value, error, unit] = reference[name];
      const p = found.parameters.find((q) => q.name === name);
      expect(Math.abs((p?.value ?? NaN) / unit - value) / error, name).toBeLessThan(1e-3);
    }
  });

  test("gives the standard errors of linear theory", () => {
    for (const name of ["bypass", "riser", "stagnant", "renewal"] as const) {
      const [, error, unit] = reference[name];
      const p = found.parameters.find((q) => q.name === name);
      expect(Math.abs((p?.standardError ?? NaN) / unit / error - 1), name).toBeLessThan(1e-3);
    }
  });

  test("baseline and drift come with it", () => {
    const terms = found.nuisance["Pulse of two minutes/out"];
    for (const [got, [value, error, unit]] of [
      [terms.offset, offset],
      [terms.drift, drift],
    ] as const) {
      expect(Math.abs((got?.value ?? NaN) / unit - value) / error).toBeLessThan(1e-3);
      expect(Math.abs((got?.standardError ?? NaN) / unit / error - 1)).toBeLessThan(1e-3);
    }
    expect(found.freeParameters).toBe(6);
  });

  // Single-start residual bootstrap of the same reference: 95 % of the tube volumes lie in 144.9 to 154.2 L, where the front
  // crosses a sample; linear theory says 134 to 163 L.
  test("says that the linear interval of the tube volume does not hold", () => {
    const said = found.findings.filter((f) => f.code === "interval-not-linear");
    expect(said.flatMap((f) => f.about)).toContain("riser");
    expect(said.flatMap((f) => f.about)).not.toContain("bypass");
    expect(found.profiles).toBeUndefined();
  });

  test("the profile ends where the front crosses a sample", () => {
    const { fit: profiled } = fit(network, [trial], { profile: true });
    const riser = profiled?.profiles?.find((p) => p.name === "riser");
    const [low, high] = (riser?.interval95 ?? []).map((v) => (v ?? Number.NaN) * 1e3);
    expect(Math.abs(low - 144.9)).toBeLessThan(0.15);
    expect(Math.abs(high - 154.2)).toBeLessThan(0.15);
    expect(riser?.ends).toEqual(["step", "step"]);
    const bypass = profiled?.profiles?.find((p) => p.name === "bypass");
    const linear = found.parameters.find((p) => p.name === "bypass")?.interval95 ?? [];
    bypass?.interval95.forEach((v, k) => {
      expect(Math.abs((v ?? Number.NaN) - linear[k])).toBeLessThan(0.05 * 2.681e-4);
    });
    expect(profiled?.findings.find((f) => f.code === "interval-by-profile")?.message).toContain("riser is 14");
    expect(profiled?.residualSumOfSquares).toBe(found.residualSumOfSquares);
  });
});
