import { describe, expect, test } from "vitest";
import { type Complex, complex } from "../../src/numerics/complex.js";
import { scaledExpint, scaledExpintSlope } from "../../src/numerics/expint.js";

const { add, multiply, scale, subtract, exp, size } = complex;
const ring = (radius: number): Complex[] =>
  Array.from({ length: 24 }, (_, k) => {
    const angle = ((k + 0.5) / 24) * 2 * Math.PI;
    return { re: radius * Math.cos(angle), im: radius * Math.sin(angle) };
  });
const radii = [1e-6, 0.01, 0.5, 1, 1.9, 2.1, 5, 12, 30, 59, 61, 300];

describe("exponential integrals", () => {
  // Abramowitz & Stegun, Handbook of Mathematical Functions, tables 5.1 and 5.4 (from memory): E1(1), E1(2), E2(1), E3(1)
  test.each([
    [1, 1, 0.21938393439552029],
    [1, 2, 0.04890051070806112],
    [2, 1, 0.14849550677592205],
    [3, 1, 0.10969196719776014],
  ])("E%i(%f) has its tabulated value", (n, x, wanted) => {
    expect(scaledExpint(n, { re: x, im: 0 }).re * Math.exp(-x)).toBeCloseTo(wanted, 14);
  });

  test("n E_(n+1) = e^-z - z E_n all over the plane", () => {
    for (const radius of radii) {
      for (const z of ring(radius)) {
        for (const n of [1, 2, 3]) {
          const left = add(scale(scaledExpint(n + 1, z), n), multiply(z, scaledExpint(n, z)));
          const error = size(subtract(left, { re: 1, im: 0 }));
          // near the cut e^z E_n holds the large e^z 2 pi i z^(n-1)/(n-1)!
          const parts = 1 + size(z) * size(scaledExpint(n, z));
          expect(error / parts, `n ${n}, z ${z.re} ${z.im}`).toBeLessThan(2e-13);
        }
      }
    }
  });

  test("the slope of e^z E_n is its difference quotient of the sixth order, and e^z (E_n - E_(n-1))", () => {
    for (const radius of [0.01, 0.5, 0.99, 1.01, 5, 30, 49, 51, 300]) {
      for (const z of ring(radius)) {
        if (z.re < 0) continue;
        for (const n of [2, 3]) {
          const slope = scaledExpintSlope(n, z);
          const h = 0.02 * radius;
          const at = (k: number): Complex => scaledExpint(n, { re: z.re + k * h, im: z.im });
          const pair = (k: number): Complex => subtract(at(k), at(-k));
          const sum = add(add(scale(pair(1), 45), scale(pair(2), -9)), pair(3));
          expect(size(subtract(scale(sum, 1 / (60 * h)), slope)) / size(slope), `${n} ${z.re} ${z.im}`).toBeLessThan(
            1e-8,
          );
          const difference = subtract(scaledExpint(n, z), scaledExpint(n - 1, z));
          expect(size(subtract(difference, slope)) * size(z)).toBeLessThan(1e-12);
        }
      }
    }
  });

  test("E3 is the integral that defines it, in the right half plane", () => {
    const panels = 4000;
    for (const z of [
      { re: 0.3, im: 0.2 },
      { re: 1, im: 3 },
      { re: 0.8, im: 6 },
    ]) {
      // with u = 1/t the integral is that of u e^(-z/u) over (0, 1); Simpson
      let sum: Complex = { re: 0, im: 0 };
      for (let k = 1; k <= panels; k++) {
        const u = k / panels;
        const weight = k === panels ? 1 : k % 2 === 1 ? 4 : 2;
        sum = add(sum, scale(exp(scale(z, -1 / u)), (weight * u) / (3 * panels)));
      }
      const e3 = multiply(scaledExpint(3, z), exp(scale(z, -1)));
      expect(size(subtract(sum, e3))).toBeLessThan(1e-9);
    }
  });

  test("conjugate points give conjugate values; on the positive axis they are real", () => {
    for (const z of [...ring(1.5), ...ring(20)]) {
      const [a, b] = [scaledExpint(3, z), scaledExpint(3, { re: z.re, im: -z.im })];
      expect(size(subtract(a, { re: b.re, im: -b.im }))).toBeLessThan(1e-14 * size(a));
    }
    expect(scaledExpint(3, { re: 4, im: 0 }).im).toBe(0);
    expect(scaledExpint(3, { re: 0, im: 0 }).re).toBe(0.5);
  });
});
