import { expect, test } from "vitest";
import { incompleteBeta, incompleteGamma, logGamma } from "../../src/numerics/special-functions.js";

// Computed in 30-digit arithmetic by another program (mpmath).
test.each([
  [0.1, 2.252712651734206],
  [1.5, -0.12078223763524522],
  [10, 12.801827480081469],
  [15.9, 27.625493215168692],
  [16.1, 28.173694494813542],
  [100, 359.1342053695754],
  [1e6, 12815504.569147611],
])("ln Gamma(%d)", (x, known) => {
  expect(Math.abs(logGamma(x) / known - 1)).toBeLessThan(2e-14);
});

test("ln Gamma(x + 1) = ln Gamma(x) + ln x across every branch", () => {
  for (let x = 0.05; x < 40; x += 0.05) expect(logGamma(x + 1)).toBeCloseTo(logGamma(x) + Math.log(x), 12);
});

test("the two incomplete gamma functions add to 1 and follow their recurrence in a", () => {
  for (const a of [0.2, 1, 3.7, 40, 3000]) {
    for (const ratio of [0.05, 0.7, 0.99, 1.01, 1.5, 8]) {
      const x = a * ratio;
      const { below, above } = incompleteGamma(a, x);
      expect(below + above).toBeCloseTo(1, 14);
      const step = Math.exp(a * Math.log(x) - x - logGamma(a + 1));
      expect(incompleteGamma(a + 1, x).below).toBeCloseTo(below - step, 11);
    }
  }
});

test("incomplete beta: values, and mirror images", () => {
  // 40-digit arithmetic; the second as a binomial tail
  expect(incompleteBeta(0.3, 0.2, 0.9).below).toBeCloseTo(0.5878659956367569, 13);
  expect(Math.abs(incompleteBeta(5000, 7000, 0.42).below / 0.7706878535437877 - 1)).toBeLessThan(1e-11);
  for (const x of [0.001, 0.2, 0.5, 0.999]) {
    expect(incompleteBeta(2.5, 7, x).below).toBeCloseTo(incompleteBeta(7, 2.5, 1 - x).above, 14);
  }
});

test("ends and nonsense", () => {
  expect(incompleteGamma(2, 0)).toEqual({ below: 0, above: 1 });
  expect(incompleteGamma(2, Number.POSITIVE_INFINITY)).toEqual({ below: 1, above: 0 });
  expect(incompleteGamma(-1, 1).below).toBeNaN();
  expect(incompleteBeta(1, 1, 0).below).toBe(0);
  expect(incompleteBeta(1, 1, 1).below).toBe(1);
  expect(incompleteBeta(0, 1, 0.5).below).toBeNaN();
  expect(logGamma(0)).toBe(Number.POSITIVE_INFINITY);
  expect(logGamma(-1)).toBeNaN();
});
