import { describe, expect, test } from "vitest";
import { fineCurves } from "../../src/study/fine-curves.js";
import { networkOf } from "../fit/load.js";
import { every, fitted, noisy, synthetic } from "../fit/synthetic.js";

const tank = networkOf(`network: One tank
format: 1
parameters:
  volume: {value: 80 L, between: [20 L, 300 L]}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments:
  tank: {kind: stirred, volume: volume, to: out}
outlets: [out]
`);

const test14 = (reading: readonly string[], count = 14) =>
  synthetic(
    tank,
    { volume: 0.1 },
    {
      injection: "{at: feed, pulse: 50 g}",
      at: "out",
      times: every(3, count),
      noise: (i) => 0.2 + noisy(i + 1, 0.002)(),
      reading,
    },
  );

describe("fitted curves between their samples", () => {
  test.each([["baseline: constant"], ["baseline: drift"]])("with %s follow the closed form of one tank", (baseline) => {
    const trial = test14([baseline]);
    const fit = fitted(tank, [trial]);
    const [{ key, time, fitted: at }] = fit.readings;
    const fine = fineCurves(tank, [trial], fit).get(key);
    expect(fine).toBeDefined();
    expect(fine?.time[0]).toBe(time[0]);
    expect(fine?.time.at(-1)).toBe(time.at(-1));
    // c = c0 exp(-t Q/V) + a + b t: what the samples say of a and b holds between them.
    const rate = 1e-2 / 60 / fit.values.volume;
    const decay = (t: number): number => (0.05 / fit.values.volume) * Math.exp(-t * rate);
    const rest = at.map((v, i) => v - decay(time[i]));
    const slope = (rest[13] - rest[0]) / (time[13] - time[0]);
    fine?.time.forEach((t, i) => {
      expect(fine.value[i]).toBeCloseTo(decay(t) + rest[0] + slope * (t - time[0]), 6);
    });
  });

  test("are not asked for where the samples show the curve themselves", () => {
    const trial = test14(["baseline: constant"], 120);
    expect(fineCurves(tank, [trial], fitted(tank, [trial])).size).toBe(0);
  });

  test("are left out where the fitted curve is another than the model's", () => {
    const trial = test14(["baseline: constant"]);
    const fit = fitted(tank, [trial]);
    const bent = fit.readings.map((r) => ({ ...r, fitted: r.fitted.map((v, i) => v + 1e-3 * i * i) }));
    expect(fineCurves(tank, [trial], { ...fit, readings: bent }).size).toBe(0);
  });
});
