import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Algebra, evenHyperbolic } from "../../src/numerics/algebra.js";
import { type Complex, complex } from "../../src/numerics/complex.js";
import { taylor, variable } from "../../src/numerics/taylor.js";

const { add, subtract, multiply, divide, exp, sqrt, log1p, size } = complex;
const point = fc.record({
  re: fc.double({ min: -20, max: 20, noNaN: true }),
  im: fc.double({ min: -20, max: 20, noNaN: true }),
});
const near = (a: Complex, b: Complex, within: number): void =>
  expect(size(subtract(a, b))).toBeLessThan(within * (1 + size(b)));

describe("complex numbers", () => {
  test("division undoes multiplication, the square a root, exp a logarithm", () => {
    fc.assert(
      fc.property(point, point, (a, b) => {
        if (size(b) > 1e-6) near(divide(multiply(a, b), b), a, 1e-13);
        const root = sqrt(a);
        near(multiply(root, root), a, 1e-14);
        expect(root.re).toBeGreaterThanOrEqual(0);
        if (size(add(a, { re: 1, im: 0 })) > 1e-6) near(exp(log1p(a)), add(a, { re: 1, im: 0 }), 1e-13);
      }),
      { numRuns: 300 },
    );
  });

  test("ln(1 + a) keeps its digits where a is small; division does not overflow", () => {
    expect(log1p({ re: 1e-18, im: 1e-18 })).toEqual({ re: 1e-18, im: 1e-18 });
    expect(divide({ re: 1e300, im: 1e300 }, { re: 1e300, im: 1e300 })).toEqual({ re: 1, im: 0 });
  });
});

describe("power series", () => {
  const t = taylor(5);
  const x = variable(5);
  const close = (a: ArrayLike<number>, b: readonly number[]): void =>
    b.forEach((wanted, k) => {
      expect(a[k]).toBeCloseTo(wanted, 13);
    });

  test("have the coefficients that everybody knows", () => {
    close(t.exp(t.scale(x, -2)), [1, -2, 2, -4 / 3, 2 / 3]);
    close(t.sqrt(t.add(t.of(1), x)), [1, 1 / 2, -1 / 8, 1 / 16, -5 / 128]);
    close(t.log1p(x), [0, 1, -1 / 2, 1 / 3, -1 / 4]);
    close(t.divide(t.of(1), t.subtract(t.of(1), x)), [1, 1, 1, 1, 1]);
    close(evenHyperbolic(x, t).cosh, [1, 1 / 2, 1 / 24, 1 / 720, 1 / 40320]);
  });

  test("agree with complex steps round the point (Cauchy's integral)", () => {
    const f = <T>(z: T, a: Algebra<T>): T => a.multiply(a.exp(a.scale(z, -0.7)), a.sqrt(a.add(a.of(2), a.log1p(z))));
    const made = f(x, t);
    const n = 64;
    for (let k = 0; k < 5; k++) {
      let sum = 0;
      for (let j = 0; j < n; j++) {
        const angle = (2 * Math.PI * j) / n;
        const value = f<Complex>({ re: 0.3 * Math.cos(angle), im: 0.3 * Math.sin(angle) }, complex);
        sum += (value.re * Math.cos(k * angle) + value.im * Math.sin(k * angle)) / n;
      }
      expect(made[k]).toBeCloseTo(sum / 0.3 ** k, 11);
    }
  });
});

test("cosh and sinh over by their series", () => {
  for (const b of [0.1, 0.7, 1]) {
    const { cosh, sinhOver } = evenHyperbolic({ re: b * b, im: 0 }, complex);
    expect(cosh.re).toBeCloseTo(Math.cosh(b), 14);
    expect(sinhOver.re).toBeCloseTo(Math.sinh(b) / b, 14);
    const turned = evenHyperbolic({ re: -b * b, im: 0 }, complex);
    expect(turned.cosh.re).toBeCloseTo(Math.cos(b), 14);
  }
});
