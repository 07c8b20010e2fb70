import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { closedPeclet } from "../../src/data/indices.js";
import { readMoments } from "../../src/data/moments.js";
import { random } from "../../src/numerics/random.js";
import { parseTrial } from "../../src/parse/trial.js";
import { readingOf, sampled, tanks } from "./helpers.js";

const min = 60;
/** 10 g into 10 L/min: area 1 g min/L, so c in g/L is E in 1/min. */
const vessel = { volume: { value: 0.02 } }; // tau = 2 min at 10 L/min

describe("equal stirred tanks, tau = 2 min", () => {
  // P. V. Danckwerts 1953; Morrill 1932; figures to three digits by quadrature of the gamma function.
  test.each([
    [1, 21.9, 0.368, 0],
    [2, 7.31, 0.271, 0.102],
    [4, 3.83, 0.195, 0.178],
    [8, 2.53, 0.14, 0.233],
  ])("n = %i: mean, variance, skewness, recovery and Danckwerts' indices", (n, morrill, hold, segregated) => {
    const r = readingOf(sampled(tanks(n, 2), 30, 6000), {}, vessel);
    expect(r.mean.value).toBeCloseTo(2 * min, 2);
    expect((r.variance.value ?? 0) / min ** 2).toBeCloseTo(4 / n, 3);
    expect(r.skewness.value).toBeCloseTo(2 / Math.sqrt(n), 2);
    expect(r.recovery.value).toBeCloseTo(1, 4);
    expect(Math.abs((r.indices.morrill.value ?? 0) / morrill - 1)).toBeLessThan(0.003);
    expect(r.indices.holdback.value).toBeCloseTo(hold, 3);
    expect(r.indices.segregation.value).toBeCloseTo(segregated, 3);
    expect(r.indices["effective-volume"].value).toBeCloseTo(0.02, 4);
    expect(r.grade).toBe("A");
    expect(r.codes).toEqual([]);
  });

  const table = readFileSync("shared/reference/closed-forms/curves-moments-conversions.csv", "utf8").split("\n");
  const reference = (name: string, quantity: string): number =>
    Number(table.map((row) => row.split(",")).find(([c, q]) => c === name && q === quantity)?.[3]);

  test.each([
    ["stirred-tank-tau5", 1, 5],
    ["tanks-N2-tau10", 2, 10],
    ["tanks-N5-tau10", 5, 10],
    ["tanks-N20-tau1", 20, 1],
  ])("%s: percentiles and holdback of the reference table", (name, n, tau) => {
    const r = readingOf(sampled(tanks(n, tau), 15 * tau, 6000), {}, { volume: { value: tau / 100 } });
    const near = (got: number | undefined, quantity: string, scale = 1) =>
      expect(Math.abs((got ?? 0) / (reference(name, quantity) * scale) - 1)).toBeLessThan(1e-3);
    near(r.t10.value, "t10", min);
    near(r.t90.value, "t90", min);
    near(r.indices.morrill.value, "morrill-index");
    near(r.indices.holdback.value, "holdback");
  });
});

describe("a record cut short", () => {
  test("an exponential tail is added in closed form: nothing is lost of a stirred tank cut at 2 tau", () => {
    const r = readingOf(sampled(tanks(1, 2), 4, 4000), {}, vessel);
    expect(r.mean.value).toBeCloseTo(2 * min, 2);
    expect((r.variance.value ?? 0) / min ** 2).toBeCloseTo(4, 3);
    expect(r.skewness.value).toBeCloseTo(2, 2);
    expect(r.tailShare.area).toBeCloseTo(Math.exp(-2), 3);
    expect(r.t90.value).toBeCloseTo(2 * min * Math.log(10), 1);
    expect(r.codes).toEqual(["tail-share"]);
    expect(r.grade).toBe("B");
  });

  test("a curve cut before it falls steadily gives no mean, and says so", () => {
    const r = readingOf(sampled(tanks(3, 2), 1.6, 40));
    expect(r.mean.value).toBeUndefined();
    expect(r.codes).toContain("tail-open");
    expect(r.grade).toBe("C");
  });

  test("a power law has no mean that can be told", () => {
    const r = readingOf(sampled((t) => (t < 0.2 ? t * 5 : (t / 0.2) ** -1.8), 20, 1000));
    expect(r.codes).toContain("tail-power");
    expect(r.mean.value).toBeUndefined();
    expect(r.t10.value).toBeGreaterThan(0);
  });
});

describe("declared cleaning", () => {
  const clean = readingOf(sampled(tanks(3, 2), 20, 2000));
  const same = (r: typeof clean, digits = 1) => {
    expect(r.mean.value).toBeCloseTo(clean.mean.value ?? 0, digits);
    expect(r.variance.value).toBeCloseTo(clean.variance.value ?? 0, digits - 1);
  };

  test("a line delay and the start of the injection are taken off the time", () => {
    const late = sampled(tanks(3, 2), 20, 2000).map(([t, c]): [number, number] => [t + 7.5, c]);
    const r = readingOf(late, {
      injection: "{at: feed, pulse: 10 g, start: 7 min}",
      reading: "line: {delay: 0.5 min}",
    });
    same(r, 6);
    expect(r.steps.map((s) => s.name)).toEqual(["raw", "time zero", "line delay", "front and tail"]);
    expect(r.steps[0].mean).toBeCloseTo((clean.steps[0].mean ?? 0) + 7.5 * min, 6);
    expect(r.steps[1].mean).toBeCloseTo((clean.steps[0].mean ?? 0) + 0.5 * min, 6);
  });

  test("clock times: the same curve", () => {
    const two = (x: number) => String(Math.floor(x)).padStart(2, "0");
    const clocked = sampled(tanks(3, 2), 20, 2000).map(([t, c]): [string, number] => {
      const s = (t + 23 * 60 + 55) * 60;
      return [`${two((s / 3600) % 24)}:${two((s / 60) % 60)}:${(s % 60).toFixed(3)}`, c];
    });
    const r = readingOf(clocked, {
      injection: "{at: feed, pulse: 10 g, start: 23:55:00}",
      time: '{column: t, format: "h:m:s"}',
    });
    same(r, 4);
  });

  test("a rectangular pulse of width w: mean + w/2, variance + w^2/12, both taken off", () => {
    // F of one tank, tau 2, over a pulse of 1 min: (F(t) - F(t - 1)) / 1
    const F = (t: number) => (t <= 0 ? 0 : -Math.expm1(-t / 2));
    const r = readingOf(
      sampled((t) => F(t) - F(t - 1), 40, 8000),
      { injection: "{at: feed, pulse: 10 g, lasting: 1 min}" },
    );
    expect(r.mean.value).toBeCloseTo(2 * min, 2);
    expect((r.variance.value ?? 0) / min ** 2).toBeCloseTo(4, 3);
  });

  test("a detector's lag: its moments are taken off", () => {
    // Two unequal tanks in series, tau 2 and lag 0.5
    const c = (t: number) => (Math.exp(-t / 2) - Math.exp(-t / 0.5)) / 1.5;
    const r = readingOf(sampled(c, 40, 8000), { reading: "line: {lag: 0.5 min}" });
    expect(r.mean.value).toBeCloseTo(2 * min, 2);
    expect((r.variance.value ?? 0) / min ** 2).toBeCloseTo(4, 3);
    expect(r.skewness.value).toBeCloseTo(2, 2);
  });

  test("calibration, and a constant and a drift under it", () => {
    const raw = (t: number, drift: number) => 0.21 + 1.9 * (t < 5 ? 0 : tanks(3, 2)(t - 5)) + drift * t;
    const points = (drift: number) => sampled((t) => raw(t, drift), 40, 4000);
    const reading = (baseline: string) =>
      `calibration: {blank: 0.1 g/L, rise: 1.9 g/L, per: 1 g/L}\nbaseline: ${baseline}`;
    const injection = "{at: feed, pulse: 10 g, start: 5 min}";
    same(readingOf(points(0), { injection, reading: reading("constant") }), 3);
    same(readingOf(points(0.003), { injection, reading: reading("drift") }), 3);
    const bare = readingOf(points(0), {
      injection,
      reading: "calibration: {blank: 0.1 g/L, rise: 1.9 g/L, per: 1 g/L}",
    });
    expect(bare.codes).toContain("baseline-left");
  });

  test("points left out leave no trace", () => {
    const spiky = sampled(tanks(3, 2), 20, 2000).map(([t, c]): [number, number] => [
      t,
      t > 15.004 && t < 15.996 ? 9 : c,
    ]);
    const r = readingOf(spiky, {
      reading: "leave-out: [{from: 15.005 min, to: 15.995 min, because: air in the cell}]",
    });
    same(r, 1);
    expect(r.steps.map((s) => s.name)).toEqual(["raw", "leave-out", "front and tail"]);
  });
});

describe("steps and measured inlets", () => {
  const F = (t: number) => (t <= 0 ? 0 : 1 - Math.exp(-t / 2));

  test.each([
    ["up", "{at: feed, step: 2 g/L}", (t: number) => 2 * F(t)],
    ["down", "{at: feed, step: {from: 1.5 g/L, to: 0.2 g/L}}", (t: number) => 1.5 - 1.3 * F(t)],
    ["a dosing rate", "{at: feed, step: 20 g/min}", (t: number) => 2 * F(t)],
  ])("%s", (_, injection, c) => {
    const r = readingOf(sampled(c, 30, 2000), { injection });
    expect(r.mean.value).toBeCloseTo(2 * min, 1);
    expect((r.variance.value ?? 0) / min ** 2).toBeCloseTo(4, 2);
    expect(r.t10.value).toBeCloseTo(-2 * min * Math.log(0.9), 1);
    expect(r.recovery.value).toBeCloseTo(1, 4);
  });

  test("a step stopped early is closed by its exponential", () => {
    const r = readingOf(
      sampled((t) => 2 * F(t), 5, 1000),
      { injection: "{at: feed, step: 2 g/L}" },
    );
    expect(r.mean.value).toBeCloseTo(2 * min, 1);
    expect(r.codes).toContain("tail-share");
  });

  test("moments of a measured inlet are taken off", () => {
    // A tank of tau 0.5 before the vessel, a tank of tau 2; both are measured.
    const table = (c: (t: number) => number) =>
      `t,c\n${sampled(c, 40, 4000)
        .map((row) => row.join(","))
        .join("\n")}`;
    const files: Record<string, string> = {
      "in.csv": table(tanks(1, 0.5)),
      "out.csv": table((t) => (Math.exp(-t / 2) - Math.exp(-t / 0.5)) / 1.5),
    };
    const columns = "time: {column: t, unit: min}, value: {column: c, unit: g/L}";
    const text = [
      "trial: Two probes",
      "format: 1",
      `injection: {at: feed, signal: {file: in.csv, ${columns}}}`,
      `readings: [{at: product, file: out.csv, ${columns}}]`,
    ].join("\n");
    const { document, problems } = parseTrial(text, { path: "t.yaml", read: (path) => files[path] });
    expect(problems).toEqual([]);
    const r = document && readMoments(document).readings[0];
    expect(r?.mean.value).toBeCloseTo(2 * min, 1);
    expect((r?.variance.value ?? 0) / min ** 2).toBeCloseTo(4, 2);
    expect(r?.recovery.value).toBeCloseTo(1, 4);
    expect(r?.t10.value).toBeUndefined();
  });
});

describe("hopeless data end in a finding, never in a number", () => {
  const none = (r: ReturnType<typeof readingOf>, code: string) => {
    expect(r.codes).toEqual([code]);
    expect(r.grade).toBe("C");
    for (const f of [r.mean, r.variance, r.skewness, r.t10, r.t50, r.t90, r.area, r.recovery])
      expect(f.value).toBeUndefined();
  };

  test("all zeros, a constant, three points, a curve under zero", () => {
    none(readingOf(sampled(() => 0, 10, 50)), "no-signal");
    none(readingOf(sampled(() => 3.2, 10, 50)), "no-signal");
    none(
      readingOf([
        [0, 0],
        [1, 4],
        [2, 0],
      ]),
      "few-points",
    );
    none(readingOf(sampled((t) => -tanks(3, 2)(t), 10, 50)), "few-points");
    none(readingOf(sampled((t) => (t === 5 ? 1 : 0), 10, 50)), "few-points");
  });

  test("noise alone, fifty times over", () => {
    for (let seed = 1; seed <= 50; seed++) {
      const { normal } = random(seed);
      none(readingOf(sampled(() => 1 + 0.01 * normal(), 20, 30 + 5 * seed)), "only-noise");
    }
  });
});

describe("error bars", () => {
  test("cover the truth as often as they say: mean and variance of 200 noisy curves", () => {
    const { normal } = random(11);
    const z = Array.from({ length: 200 }, () => {
      const noisy = sampled((t) => tanks(3, 2)(t) + 0.005 * normal(), 12, 120);
      const r = readingOf(noisy, { reading: "noise: {floor: 0.005 g/L}" });
      if (r.mean.value === undefined || !("standardError" in r.mean)) return Number.NaN;
      return (r.mean.value - 2 * min) / (r.mean.standardError ?? Number.NaN);
    }).filter((x) => !Number.isNaN(x));
    const spread = Math.sqrt(z.reduce((sum, x) => sum + x * x, 0) / z.length);
    expect(z.length).toBeGreaterThan(180);
    expect(spread).toBeGreaterThan(0.85);
    expect(spread).toBeLessThan(1.2);
  });
});

test("the closed Péclet number undoes its variance", () => {
  for (const pe of [1e-3, 0.1, 1, 7.5, 120, 1e4]) {
    const spread = 2 / pe - (2 / pe ** 2) * -Math.expm1(-pe);
    expect(Math.abs((closedPeclet(spread) ?? 0) / pe - 1)).toBeLessThan(pe < 0.01 ? 1e-2 : 1e-8);
  }
  expect(closedPeclet(1.2)).toBeUndefined();
});

test("mean against volume over flow: only what the errors support", () => {
  const points = sampled(tanks(3, 2), 20, 2000);
  const codes = (liters: number, sd: number) =>
    readingOf(points, {}, { volume: { value: liters / 1000, sd: sd / 1000 } }).codes;
  expect(codes(25, 0.1)).toEqual(["mean-early"]);
  expect(codes(25, 4)).toEqual([]);
  expect(codes(16, 0.1)).toEqual(["mean-late"]);
});

test("recovery: dose and flow errors are carried, and what is off is told", () => {
  const points = sampled(tanks(3, 2), 20, 2000);
  const r = readingOf(points, { injection: "{at: feed, pulse: 14 g ± 3 %}", flows: "{feed: 10 L/min ± 4 %}" });
  expect(r.recovery.value).toBeCloseTo(10 / 14, 4);
  expect("standardError" in r.recovery ? r.recovery.standardError : 0).toBeCloseTo((0.05 * 10) / 14, 4);
  expect(r.codes).toEqual(["recovery-low"]);
});
