import fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
  chiSquareCdf,
  chiSquareQuantile,
  fCdf,
  fQuantile,
  normalCdf,
  normalQuantile,
  studentTCdf,
  studentTQuantile,
} from "../../src/numerics/distributions.js";

/** Relative difference. */
const off = (x: number, known: number): number => Math.abs(x / known - 1);

// Values marked "30 digits" were computed in 30-digit arithmetic from the defining integrals, by another program (mpmath).
describe("values in 30 digits", () => {
  test.each([
    ["normal -1", normalCdf(-1), 0.15865525393145705],
    ["normal 0.5", normalCdf(0.5), 0.6914624612740131],
    ["normal -8", normalCdf(-8), 6.220960574271784e-16],
    ["normal -37", normalCdf(-37), 5.725571222524577e-300],
    ["normal quantile 0.975", normalQuantile(0.975), 1.9599639845400543],
    ["normal quantile 1e-20", normalQuantile(1e-20), -9.262340089798407],
    ["t quantile 0.975, 10", studentTQuantile(0.975, 10), 2.228138851986275],
    ["t quantile 0.005, 3", studentTQuantile(0.005, 3), -5.840909309733357],
    ["t quantile 0.9, 2.5", studentTQuantile(0.9, 2.5), 1.7302509288071766],
    ["t quantile 0.975, 1e5", studentTQuantile(0.975, 1e5), 1.9599877075346097],
    ["chi-square 5, 3", chiSquareCdf(5, 3), 0.8282028557032669],
    ["chi-square 90, 100", chiSquareCdf(90, 100), 0.2468020344001703],
    ["chi-square 1e5, 1e5", chiSquareCdf(1e5, 1e5), 0.5005947081047933],
    ["chi-square 0.001, 1", chiSquareCdf(0.001, 1), 0.025227120630039613],
    ["chi-square quantile 0.95, 10", chiSquareQuantile(0.95, 10), 18.307038053275146],
    ["chi-square quantile 0.01, 1", chiSquareQuantile(0.01, 1), 0.00015708785790970197],
    ["F 2, 3, 20", fCdf(2, 3, 20), 0.8535611969133785],
    ["F 0.5, 200, 300", fCdf(0.5, 200, 300), 1.0634533689132352e-7],
    ["F 4, 1, 1", fCdf(4, 1, 1), 0.7048327646991335],
    ["F quantile 0.95, 3, 20", fQuantile(0.95, 3, 20), 3.09839121214078],
    ["F quantile 0.99, 2, 1000", fQuantile(0.99, 2, 1000), 4.626443038342206],
  ])("%s", (_name, found, known) => {
    expect(off(found, known)).toBeLessThan(2e-12);
  });
});

describe("closed forms", () => {
  test("t of 1 degree is Cauchy's, of 2 degrees algebraic", () => {
    for (const t of [-50, -3, -0.1, 0, 0.7, 4, 1e4]) {
      expect(studentTCdf(t, 1)).toBeCloseTo(0.5 + Math.atan(t) / Math.PI, 13);
      expect(studentTCdf(t, 2)).toBeCloseTo(0.5 + t / (2 * Math.sqrt(2 + t * t)), 13);
    }
  });

  test("chi-square of 2 degrees is exponential", () => {
    for (const x of [1e-8, 0.3, 5, 60]) expect(off(chiSquareCdf(x, 2), -Math.expm1(-x / 2))).toBeLessThan(1e-13);
  });
});

describe("laws", () => {
  const somewhere = fc.double({ min: 0.0005, max: 0.9995, noNaN: true });
  const freedom = fc.double({ min: 0.5, max: 5000, noNaN: true });

  test("a quantile undoes its distribution", () => {
    fc.assert(
      fc.property(somewhere, freedom, freedom, (p, a, b) => {
        expect(normalCdf(normalQuantile(p))).toBeCloseTo(p, 12);
        expect(studentTCdf(studentTQuantile(p, a), a)).toBeCloseTo(p, 10);
        expect(chiSquareCdf(chiSquareQuantile(p, a), a)).toBeCloseTo(p, 10);
        expect(fCdf(fQuantile(p, a, b), a, b)).toBeCloseTo(p, 10);
      }),
      { numRuns: 60 },
    );
  });

  test("the square of t is F with 1 degree above; F turned over is F with its degrees exchanged", () => {
    fc.assert(
      fc.property(fc.double({ min: 0.01, max: 20, noNaN: true }), freedom, freedom, (x, a, b) => {
        expect(fCdf(x * x, 1, a)).toBeCloseTo(2 * studentTCdf(x, a) - 1, 11);
        expect(fCdf(x, a, b)).toBeCloseTo(1 - fCdf(1 / x, b, a), 11);
      }),
      { numRuns: 60 },
    );
  });

  test("distributions rise", () => {
    for (const f of [normalCdf, (x: number) => studentTCdf(x, 3), (x: number) => chiSquareCdf(x, 7)]) {
      for (let x = -5; x < 30; x += 0.125) expect(f(x + 0.125)).toBeGreaterThanOrEqual(f(x));
    }
  });
});

test("the ends, and nonsense", () => {
  expect(normalQuantile(0)).toBe(Number.NEGATIVE_INFINITY);
  expect(normalQuantile(1)).toBe(Number.POSITIVE_INFINITY);
  expect(normalQuantile(0.5)).toBeCloseTo(0, 15);
  expect(normalQuantile(1.1)).toBeNaN();
  expect(chiSquareQuantile(0, 3)).toBe(0);
  expect(chiSquareQuantile(1, 3)).toBe(Number.POSITIVE_INFINITY);
  expect(fQuantile(-0.1, 1, 1)).toBeNaN();
  expect(studentTCdf(Number.POSITIVE_INFINITY, 4)).toBe(1);
  expect(studentTQuantile(0.9, -1)).toBeNaN();
});
