import { describe, expect, test } from "vitest";
import { isNoise } from "../../src/data/noise.js";
import { fit } from "../../src/fit/fit.js";
import { networkOf, trialOf } from "./load.js";
import { every, noisy, synthetic } from "./synthetic.js";

const tank = networkOf(`network: One tank
format: 1
parameters:
  held: {value: 80 L, between: [10 L, 500 L]}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments: {bulk: {kind: stirred, volume: held, to: out}}
outlets: [out]
`);

const log = (value: (i: number) => number, baseline = "none", title = "Log") =>
  trialOf(
    `trial: ${title}
format: 1
injection: {at: feed, pulse: 50 g}
readings:
  - at: out
    file: log.csv
    time: {column: t, unit: min}
    value: {column: c, unit: g/L}
    baseline: ${baseline}
`,
    () => `t,c\n${Array.from({ length: 60 }, (_, i) => `${i},${value(i)}\n`).join("")}`,
  );

describe("readings of nothing", () => {
  test("all below the limit of detection is no fit", () => {
    const trial = trialOf(
      `trial: Log
format: 1
injection: {at: feed, pulse: 50 g}
readings:
  - {at: out, file: log.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}, limits: {below: 10 g/L}}
`,
      () => `t,c\n${Array.from({ length: 60 }, (_, i) => `${i},${0.5 * Math.exp(-i / 10)}\n`).join("")}`,
    );
    const { fit: found, problems } = fit(tank, [trial], { starts: 0 });
    expect(found).toBeUndefined();
    expect(problems.map((p) => p.code)).toEqual(["all-beyond-limits"]);
  });

  test("three points are no curve, however few the unknowns", () => {
    const few = (times: readonly number[], reading: readonly string[] = []) =>
      synthetic(
        tank,
        { held: 0.1 },
        { injection: "{at: feed, pulse: 50 g, start: 0 min}", at: "out", times, reading, noise: noisy(1, 1e-3) },
      );
    for (const reading of [[], ["noise: {floor: 0.001 g/L}"]]) {
      const { fit: found, problems } = fit(tank, [few([1, 10, 20], reading)]);
      expect(found).toBeUndefined();
      expect(problems.map((p) => p.code)).toEqual(["too-few-points"]);
    }
    expect(fit(tank, [few([1, 5, 10, 20, 30])]).fit?.values.held).toBeCloseTo(0.1, 2);
  });

  test("a long record shows a curve that lies within the scatter of its points", () => {
    const noise = noisy(3, 0.3);
    const long = Float64Array.from({ length: 600 }, (_, i) => 0.5 * Math.exp(-i / 75) + noise());
    expect(isNoise(Float64Array.from(long.keys()), long)).toBe(false);
    let taken = 0;
    for (let seed = 1; seed <= 200; seed++) {
      const blank = noisy(seed, 0.3);
      const y = Float64Array.from({ length: 600 }, () => blank());
      if (!isNoise(Float64Array.from(y.keys()), y)) taken++;
    }
    expect(taken).toBeLessThanOrEqual(2);
  });

  test.each(["none", "constant", "drift"])("only noise is refused, whatever the baseline: %s", (baseline) => {
    for (let seed = 1; seed < 12; seed++) {
      const noise = noisy(seed, 0.01);
      const { fit: found, problems } = fit(tank, [log(() => 0.2 + noise(), baseline)], { starts: 0 });
      expect(found).toBeUndefined();
      expect(problems.map((p) => p.code)).toEqual(["only-noise-to-fit"]);
    }
  });

  test("beside a reading that shows tracer it is a reading like any other", () => {
    const noise = noisy(3, 0.003);
    const seen = synthetic(
      tank,
      { held: 0.1 },
      { injection: "{at: feed, pulse: 50 g}", at: "out", times: every(1, 40), noise },
    );
    const silent = noisy(5, 0.01);
    expect(fit(tank, [seen, log(() => silent())], { starts: 0 }).fit).toBeDefined();
  });

  test("a log that only rises is fitted, and the first finding says that it explains nothing", () => {
    const { fit: found } = fit(tank, [log((i) => 0.1 + 0.001 * i)], { starts: 0 });
    expect(found?.findings[0].code).toBe("explains-nothing");
    expect(Number(found?.findings[0].evidence.fitted)).toBeGreaterThan(Number(found?.findings[0].evidence.flat));
  });

  test("curves with tracer in them never are nothing, down to a peak of six times the noise", () => {
    for (let seed = 1; seed < 20; seed++) {
      const trial = synthetic(
        tank,
        { held: 0.1 },
        { injection: "{at: feed, pulse: 50 g}", at: "out", times: every(1, 40), noise: noisy(seed, 0.08) },
      );
      const { fit: found } = fit(tank, [trial], { starts: 0 });
      expect(found?.findings.map((f) => f.code)).not.toContain("explains-nothing");
      expect(found).toBeDefined();
    }
  });
});
