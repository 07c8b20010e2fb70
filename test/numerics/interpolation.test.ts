import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { linearInterpolant, monotoneCubic } from "../../src/numerics/interpolation.js";

const somePoints = fc
  .array(fc.record({ gap: fc.integer({ min: 1, max: 50 }), y: fc.integer({ min: -100, max: 100 }) }), {
    minLength: 1,
    maxLength: 12,
  })
  .map((steps) => {
    let at = 0;
    return { x: steps.map(({ gap }) => (at += gap)), y: steps.map(({ y }) => y) };
  });

describe.each([
  ["straight lines", linearInterpolant],
  ["monotone cubic", monotoneCubic],
])("%s", (_name, through) => {
  test("goes through its points and stays between neighbours", () => {
    fc.assert(
      fc.property(somePoints, ({ x, y }) => {
        const f = through(x, y);
        x.forEach((t, k) => {
          expect(f(t)).toBeCloseTo(y[k], 10);
          if (k === 0) return;
          const [low, high] = [Math.min(y[k - 1], y[k]), Math.max(y[k - 1], y[k])];
          let before = y[k - 1];
          for (let s = 0; s <= 20; s++) {
            const v = f(x[k - 1] + (s / 20) * (t - x[k - 1]));
            expect(v).toBeGreaterThanOrEqual(low - 1e-9);
            expect(v).toBeLessThanOrEqual(high + 1e-9);
            expect((v - before) * Math.sign(y[k] - y[k - 1])).toBeGreaterThanOrEqual(-1e-9);
            before = v;
          }
        });
      }),
      { numRuns: 60 },
    );
  });

  test("keeps the end values outside, and NaN", () => {
    const f = through([1, 2, 4], [5, 6, 3]);
    expect(f(0)).toBe(5);
    expect(f(9)).toBe(3);
    expect(f(Number.NaN)).toBeNaN();
    expect(through([3], [8])(-1)).toBe(8);
  });

  test("is exact on a straight line", () => {
    const f = through([0, 1, 3, 3.5], [1, 3, 7, 8]);
    for (let t = 0; t <= 3.5; t += 0.1) expect(f(t)).toBeCloseTo(1 + 2 * t, 12);
  });

  test("refuses points that make no curve", () => {
    expect(() => through([], [])).toThrow(RangeError);
    expect(() => through([1, 2], [1])).toThrow(RangeError);
    expect(() => through([2, 1], [1, 2])).toThrow(RangeError);
    expect(() => through([1, Number.NaN], [1, 2])).toThrow(RangeError);
  });
});

test("straight lines may jump; the cubic may not", () => {
  const f = linearInterpolant([0, 1, 1, 2], [0, 0, 5, 5]);
  expect([f(0.999), f(1), f(1.5)]).toEqual([0, 5, 5]);
  expect(() => monotoneCubic([0, 1, 1, 2], [0, 0, 5, 5])).toThrow(RangeError);
});

test("the cubic has a continuous slope and meets a smooth monotone curve to third order or better", () => {
  const error = (n: number): number => {
    const x = Float64Array.from({ length: n + 1 }, (_, k) => k / n);
    const f = monotoneCubic(
      x,
      x.map((t) => Math.exp(t)),
    );
    let worst = 0;
    for (let t = 0; t <= 1; t += 1 / 997) worst = Math.max(worst, Math.abs(f(t) - Math.exp(t)));
    return worst;
  };
  expect(Math.log2(error(10) / error(20))).toBeGreaterThan(2.8);
  const f = monotoneCubic([0, 1, 2, 5], [0, 2, 2.5, 9]);
  for (const t of [1, 2]) {
    const h = 1e-6;
    expect((f(t) - f(t - h)) / h).toBeCloseTo((f(t + h) - f(t)) / h, 4);
  }
});

test("Fritsch and Carlson's own data (RPN 14) stay monotone", () => {
  // Data of F.N. Fritsch, R.E. Carlson (1980), table 1 (from memory); a plain cubic spline overshoots here.
  const x = [7.99, 8.09, 8.19, 8.7, 9.2, 10, 12, 15, 20];
  const y = [0, 2.76429e-5, 4.37498e-2, 0.169183, 0.469428, 0.94374, 0.998636, 0.999919, 0.999994];
  const f = monotoneCubic(x, y);
  let before = 0;
  for (let t = 7.99; t <= 20; t += 0.01) {
    expect(f(t)).toBeGreaterThanOrEqual(before - 1e-15);
    before = f(t);
  }
});
