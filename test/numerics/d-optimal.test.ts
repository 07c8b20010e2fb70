import { expect, test } from "vitest";
import { informationOf, optimalSamples } from "../../src/numerics/d-optimal.js";
import { random } from "../../src/numerics/random.js";

// For a straight line the best samples are at the two ends, half at each (a textbook case of Fedorov's theory).
test("a straight line is told best from its ends", () => {
  const x = Array.from({ length: 21 }, (_, i) => i / 10 - 1);
  const columns = [Float64Array.from(x, () => 1), Float64Array.from(x)];
  expect(optimalSamples(columns, 21, 4)?.chosen).toEqual([0, 1, 19, 20]);
});

test("no choice of three from nine is much better than the one found, and most are not better at all", () => {
  const noise = random(2);
  let same = 0;
  for (let run = 0; run < 20; run++) {
    const columns = [0, 1].map(() => Float64Array.from({ length: 9 }, () => noise.normal()));
    const found = optimalSamples(columns, 9, 3)?.information ?? Number.NEGATIVE_INFINITY;
    let best = Number.NEGATIVE_INFINITY;
    for (let a = 0; a < 9; a++)
      for (let b = 0; b < a; b++)
        for (let c = 0; c < b; c++)
          best = Math.max(best, informationOf(columns.map((col) => Float64Array.of(col[a], col[b], col[c]))));
    if (found > best - 1e-6) same++;
    expect(found).toBeGreaterThan(best - 0.2);
    expect(found).toBeLessThan(best + 1e-6);
  }
  expect(same).toBeGreaterThanOrEqual(17);
});

test("the information of independent unknowns is the sum of their logarithms", () => {
  expect(informationOf([Float64Array.of(3, 0), Float64Array.of(0, 0.5)])).toBeCloseTo(Math.log(9) + Math.log(0.25), 8);
});

// A to B to C, the concentration of B read, rate constants 0.7 and 0.2: best read at 1.23 and 6.86
// (G. E. P. Box, H. L. Lucas, Biometrika 46 (1959) 77-90; from memory, and within the grid the best of all pairs here).
test("two rates in a row are told best from the two times of Box and Lucas", () => {
  const time = Array.from({ length: 400 }, (_, i) => (i + 1) / 40);
  const of = (a: number, b: number, t: number): number => (a / (a - b)) * (Math.exp(-b * t) - Math.exp(-a * t));
  const step = 1e-5;
  const columns = [
    Float64Array.from(time, (t) => (of(0.7 + step, 0.2, t) - of(0.7 - step, 0.2, t)) / (2 * step)),
    Float64Array.from(time, (t) => (of(0.7, 0.2 + step, t) - of(0.7, 0.2 - step, t)) / (2 * step)),
  ];
  const found = optimalSamples(columns, time.length, 2);
  const [early, late] = (found?.chosen ?? []).map((i) => time[i]);
  expect(Math.abs(early - 1.23)).toBeLessThan(0.03);
  expect(Math.abs(late - 6.86)).toBeLessThan(0.03);
  let best = Number.NEGATIVE_INFINITY;
  for (let i = 0; i < time.length; i++)
    for (let j = 0; j < i; j++)
      best = Math.max(best, Math.log((columns[0][i] * columns[1][j] - columns[0][j] * columns[1][i]) ** 2));
  expect(found?.information).toBeCloseTo(best, 6);
});
