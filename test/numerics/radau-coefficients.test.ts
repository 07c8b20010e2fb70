import { describe, expect, test } from "vitest";
import { radauCoefficients } from "../../src/numerics/radau-coefficients.js";

const root = Math.sqrt(6);

test("three stages are the published ones (Hairer & Wanner 1996, sec. IV.5 and IV.8; from memory)", () => {
  const { c, inverse, real, pairs, error } = radauCoefficients(3);
  const near = (v: number) => expect.closeTo(v, 13);
  expect(Array.from(c)).toEqual([(4 - root) / 10, (4 + root) / 10, 1].map(near));
  const a = [
    [(88 - 7 * root) / 360, (296 - 169 * root) / 1800, (-2 + 3 * root) / 225],
    [(296 + 169 * root) / 1800, (88 + 7 * root) / 360, (-2 - 3 * root) / 225],
    [(16 - root) / 36, (16 + root) / 36, 1 / 9],
  ];
  for (let i = 0; i < 3; i++)
    for (let j = 0; j < 3; j++)
      expect(a[i].reduce((sum, v, k) => sum + v * inverse[k * 3 + j], 0)).toBeCloseTo(i === j ? 1 : 0, 13);
  const [u, v] = [81 ** (1 / 3), 9 ** (1 / 3)];
  expect(1 / real).toBeCloseTo((6 + u - v) / 30, 14);
  const alpha = (12 - u + v) / 60;
  const beta = ((u + v) * Math.sqrt(3)) / 60;
  const square = alpha ** 2 + beta ** 2;
  expect(pairs[0].re).toBeCloseTo(alpha / square, 12);
  expect(pairs[0].im).toBeCloseTo(beta / square, 12);
  expect(Array.from(error)).toEqual([-(13 + 7 * root) / 3, (-13 + 7 * root) / 3, -1 / 3].map(near));
});

describe.each([1, 3, 5, 7] as const)("%i stages", (s) => {
  const { c, inverse, real, pairs, t, tInverse, error } = radauCoefficients(s);

  test("collocate: slopes of powers up to the number of stages are exact", () => {
    for (let p = 1; p <= s; p++)
      for (let i = 0; i < s; i++) {
        const slope = c.reduce((sum, x, j) => sum + inverse[i * s + j] * x ** p, 0);
        expect(slope).toBeCloseTo(p * c[i] ** (p - 1), 10);
      }
  });

  test("the transformation splits A^-1 into one real system and complex pairs", () => {
    const block = new Float64Array(s * s);
    block[0] = real;
    pairs.forEach(({ re, im }, k) => {
      const at = 1 + 2 * k;
      block[at * s + at] = re;
      block[(at + 1) * s + at + 1] = re;
      block[at * s + at + 1] = -im;
      block[(at + 1) * s + at] = im;
    });
    const product = (a: Float64Array, b: Float64Array) =>
      a.map((_, e) => {
        const [i, j] = [Math.floor(e / s), e % s];
        return Array.from({ length: s }, (_, k) => a[i * s + k] * b[k * s + j]).reduce((x, y) => x + y, 0);
      });
    const again = product(product(t, block), tInverse);
    const size = Math.max(...inverse.map(Math.abs));
    for (let e = 0; e < s * s; e++) expect(Math.abs(again[e] - inverse[e])).toBeLessThan(1e-12 * size);
  });

  test("the error estimate vanishes for polynomials up to degree s: f(0) and the stages give the same slope", () => {
    for (let p = 1; p <= s; p++)
      expect((p === 1 ? 1 : 0) + c.reduce((sum, x, j) => sum + error[j] * x ** p, 0)).toBeCloseTo(0, 11);
    expect(Math.abs(c.reduce((sum, x, j) => sum + error[j] * x ** (s + 1), 0))).toBeGreaterThan(1e-6);
  });
});
