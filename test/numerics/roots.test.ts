import fc from "fast-check";
import { expect, test } from "vitest";
import { brent } from "../../src/numerics/roots.js";

test.each<[string, (x: number) => number, number, number, number]>([
  ["cosine", Math.cos, 1, 2, Math.PI / 2],
  ["a flat cubic", (x) => (x - 1 / 3) ** 3, -1, 2, 1 / 3],
  ["a steep exponential", (x) => Math.exp(50 * x) - 2, -1, 1, Math.LN2 / 50],
  ["a pole-like curve", (x) => 1 / (x - 0.3) + 6, 0.300001, 5, 0.3 - 1 / 6 + 0],
  ["a jump", (x) => (x < 0.7 ? -1 : 2), 0, 1, 0.7],
])("finds the zero of %s", (name, f, from, to, zero) => {
  const root = brent(f, from, to);
  if (name === "a pole-like curve") expect(root).toBe("no-sign-change");
  else expect(root).toBeCloseTo(zero, name === "a flat cubic" ? 5 : 14);
});

test("is quick on smooth curves", () => {
  let calls = 0;
  const root = brent(
    (x) => {
      calls++;
      return x * x * x - 2 * x - 5; // Wallis's equation
    },
    2,
    3,
  );
  expect(root).toBeCloseTo(2.0945514815423265, 15);
  expect(calls).toBeLessThan(14);
});

test("never leaves the bracket, whichever way round it is given", () => {
  fc.assert(
    fc.property(fc.integer({ min: -99, max: 99 }), fc.integer({ min: 1, max: 9 }), (k, power) => {
      const zero = k / 100;
      const f = (x: number): number => {
        expect(Math.abs(x)).toBeLessThanOrEqual(1);
        return Math.sign(x - zero) * Math.abs(x - zero) ** power;
      };
      for (const [a, b] of [
        [-1, 1],
        [1, -1],
      ]) {
        const root = brent(f, a, b);
        expect(f(root as number)).toBeCloseTo(0, 12);
      }
    }),
  );
});

test("a zero at an end, no sign change, NaN, and a loose tolerance", () => {
  expect(brent((x) => x, 0, 1)).toBe(0);
  expect(brent((x) => x - 1, 0, 1)).toBe(1);
  expect(brent((x) => x * x + 1, -1, 1)).toBe("no-sign-change");
  expect(brent(() => Number.NaN, -1, 1)).toBe("no-sign-change");
  expect(Math.abs((brent((x) => x ** 3 - 0.2, 0, 1, 1e-3) as number) - 0.2 ** (1 / 3))).toBeLessThan(1e-3);
});
