import { expect, test } from "vitest";
import { gaussLobatto } from "../../src/numerics/gauss-lobatto.js";

test.each([1, 2, 5, 12, 30])(
  "degree %i: sums are integrals up to degree 2 p - 1, slopes are slopes up to degree p",
  (p) => {
    const { x, weight, slope } = gaussLobatto(p);
    for (let k = 0; k <= 2 * p - 1; k++) {
      const sum = x.reduce((s, z, i) => s + weight[i] * z ** k, 0);
      expect(Math.abs(sum - (k % 2 === 0 ? 2 / (k + 1) : 0))).toBeLessThan(1e-14 * (p + 1));
    }
    for (let k = 1; k <= p; k++) {
      for (let i = 0; i <= p; i++) {
        const d = x.reduce((s, z, j) => s + slope[i * (p + 1) + j] * z ** k, 0);
        expect(Math.abs(d - k * x[i] ** (k - 1))).toBeLessThan(1e-12 * p * p);
      }
    }
  },
);

test("five points as tabled (Abramowitz & Stegun 1964, table 25.6)", () => {
  const { x, weight } = gaussLobatto(4);
  expect(x[3]).toBeCloseTo(0.65465367, 8);
  expect(weight[0]).toBeCloseTo(0.1, 12);
  expect(weight[1]).toBeCloseTo(0.54444444, 8);
});
