import { describe, expect, test } from "vitest";
import { every, pair, repeated } from "./errors.js";

const two = { volume: { value: 0.11 } };
const pulse = { injection: "{at: feed, pulse: 50 g}" };

/** Seeds are fixed: what is held here are rates over many logs, with room for the chance that so many draws leave. */
describe("95 % intervals hold the truth", () => {
  test("a coarse pulse: t10 is neither late nor surer than it is, and recovery has no surplus", () => {
    const { holds } = repeated(
      {
        curve: (t) => 5 * pair.E(t),
        clock: every(1, -10, 100),
        change: pulse,
        options: two,
        figures: { ...pair.figures(), recovery: 1 },
      },
      { sd: 0.003 },
      40,
      1,
    );
    for (const name of ["mean", "variance", "t10", "t16", "t50", "t84", "t90", "recovery"]) {
      expect(holds[name].share, name).toBeGreaterThanOrEqual(87);
      expect(Math.abs(holds[name].mean), name).toBeLessThan(0.5);
    }
  });

  test.each([0, 0.2, 0.35, 0.5])("a front that falls %f min after a sample: recovery, mean and t10", (late) => {
    const curve = (t: number) => (t < 2 + late ? 0 : (5 / 8) * Math.exp(-(t - 2 - late) / 8));
    const figures = { recovery: 1, mean: 60 * (10 + late), t10: 60 * (2 + late - 8 * Math.log(0.9)) };
    const { holds } = repeated(
      { curve, clock: every(0.5, 0, 80), change: pulse, options: { volume: { value: 0.1 + late / 100 } }, figures },
      { sd: 0.005 },
      20,
      4,
    );
    for (const name of Object.keys(figures)) expect(holds[name].share, name).toBeGreaterThanOrEqual(85);
  });

  test.each([
    ["down", "{from: 1.5 g/L, to: 0.2 g/L}", (t: number) => 1.5 - 1.3 * pair.F(t)],
    ["up", "{from: 0.2 g/L, to: 0.7 g/L}", (t: number) => 0.2 + 0.5 * pair.F(t)],
  ] as const)("a step %s: the level that it ends at is unsure for its whole length", (_, step, curve) => {
    const { holds, codes } = repeated(
      {
        curve,
        clock: every(1, -10, 100),
        change: { injection: `{at: feed, step: ${step}}` },
        options: two,
        figures: { ...pair.figures(), recovery: 1 },
      },
      { sd: 0.003 },
      60,
      2,
    );
    for (const name of ["mean", "variance", "skewness", "t10", "t16", "t50", "t84", "recovery"])
      expect(holds[name].share, name).toBeGreaterThanOrEqual(85);
    expect((codes["mean-early"] ?? 0) + (codes["mean-late"] ?? 0)).toBeLessThan(12);
  });

  test.each([
    ["before the injection", -20],
    ["along the curve alone", 0],
  ])("noise that hangs together, told %s: no peaks of its own, no surplus", (_, from) => {
    const { holds, codes } = repeated(
      {
        curve: (t) => (t < 0 ? 0 : 0.5 * Math.exp(-t / 10)),
        clock: every(0.1, from, 60),
        change: pulse,
        options: { volume: { value: 0.1 } },
        figures: { recovery: 1, mean: 600, t10: -600 * Math.log(0.9), t50: -600 * Math.log(0.5) },
      },
      { sd: 0.01, lag1: 0.9 },
      20,
      5,
    );
    for (const name of Object.keys(holds)) expect(holds[name].share, name).toBeGreaterThanOrEqual(80);
    expect(codes["noise-correlated"]).toBe(100);
    expect((codes.bypass ?? 0) + (codes["intensity-falls"] ?? 0) + (codes["baseline-left"] ?? 0)).toBeLessThanOrEqual(
      5,
    );
  });
});
