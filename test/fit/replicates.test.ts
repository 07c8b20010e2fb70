import { describe, expect, test } from "vitest";
import { random } from "../../src/numerics/random.js";
import { networkOf } from "./load.js";
import { every, fitted, synthetic } from "./synthetic.js";

const tank = networkOf(`network: n
format: 1
parameters: {tank: {value: 70 L, between: [10 L, 300 L]}}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: tank, to: out}}
outlets: [out]
`);
const two = networkOf(`network: n
format: 1
parameters: {tank: {value: 70 L, between: [10 L, 300 L]}}
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: tank, repeat: 2, to: out}}
outlets: [out]
`);
const noise = (seed: number, sd: number) => {
  const draw = random(seed);
  return () => sd * draw.normal();
};
const trial = (seed: number, more: readonly string[] = [], times = every(2, 20), dose = "50 g") =>
  synthetic(
    tank,
    { tank: 0.1 },
    {
      injection: `{at: feed, pulse: ${dose}, start: 0 min, lasting: 1 min}`,
      at: "out",
      times,
      reading: more,
      noise: noise(seed, 4e-3),
    },
  );

describe("lack of fit", () => {
  test("of readings that were taken twice is what the sums by hand give", () => {
    const times = every(2, 15).flatMap((t) => [t, t]);
    const { lackOfFit: lack, readings, residualSumOfSquares, freedom } = fitted(tank, [trial(1, [], times)]);
    const [{ measured, weight }] = readings;
    let pure = 0;
    for (let i = 0; i < measured.length; i += 2) pure += ((measured[i] - measured[i + 1]) * weight[i]) ** 2 / 2;
    expect(lack?.pure.freedom).toBe(15);
    expect(lack?.pure.sum).toBeCloseTo(pure, 10);
    expect((lack?.lack.sum ?? 0) + pure).toBeCloseTo(residualSumOfSquares, 10);
    expect(lack?.lack.freedom).toBe(freedom - 15);
    expect(lack?.p).toBeGreaterThan(0.01);
  });

  test("of the right network is told as often as chance has it, of a wrong one always", () => {
    const p = Array.from({ length: 14 }, (_, k) => {
      const trials = [0, 1, 2].map((i) => trial(100 + 3 * k + i, ["baseline: constant"]));
      return [tank, two].map((network) => fitted(network, trials, { starts: 0 }).lackOfFit?.p ?? Number.NaN);
    });
    const right = p.map(([own]) => own);
    expect(right.filter((v) => v < 0.1).length).toBeLessThanOrEqual(5);
    expect(right.filter((v) => v < 0.5).length).toBeGreaterThanOrEqual(2);
    expect(right.filter((v) => v < 0.5).length).toBeLessThanOrEqual(12);
    expect(p.every(([, wrong]) => wrong < 1e-3)).toBe(true);
  });

  test("takes no tests for repeats whose mean times or areas differ by more than noise", () => {
    const other = (tankVolume: number, dose: string, seed: number) =>
      synthetic(
        tank,
        { tank: tankVolume },
        {
          injection: `{at: feed, pulse: ${dose}, start: 0 min, lasting: 1 min}`,
          at: "out",
          times: every(1, 80),
          noise: noise(seed, 4e-3),
        },
      );
    const apart = fitted(tank, [other(0.1, "50 g", 1), other(0.085, "50 g", 2)], { starts: 0 });
    expect(apart.lackOfFit).toBeUndefined();
    expect(apart.unlike).toHaveLength(2);
    const alike = fitted(tank, [other(0.1, "50 g", 1), other(0.1, "50 g", 2)], { starts: 0 });
    expect(alike.lackOfFit?.moments).toBe(80);
    expect(alike.unlike).toBeUndefined();
    // Repeats within a test still count.
    const twice = [...every(1, 80), ...every(1, 80)].sort((a, b) => a - b);
    const own = (volume: number, seed: number) =>
      synthetic(
        tank,
        { tank: volume },
        {
          injection: "{at: feed, pulse: 50 g, start: 0 min, lasting: 1 min}",
          at: "out",
          times: twice,
          noise: noise(seed, 4e-3),
        },
      );
    expect(fitted(tank, [own(0.1, 3), own(0.085, 4)], { starts: 0 }).lackOfFit?.pure.freedom).toBe(160);
  });

  test("is a finding where it is there, and nothing where no reading is repeated", () => {
    const twice = [trial(1), trial(2)];
    expect(fitted(two, twice).findings.map((f) => f.code)).toContain("lack-of-fit");
    expect(fitted(tank, twice).findings.map((f) => f.code)).not.toContain("lack-of-fit");
    expect(fitted(tank, [trial(1)]).lackOfFit).toBeUndefined();
    expect(fitted(tank, [trial(1), trial(2, [], every(2, 20), "60 g")]).lackOfFit).toBeUndefined();
    expect(fitted(tank, [trial(1), trial(1)]).lackOfFit).toBeUndefined();
  });
});
