import { describe, expect, test } from "vitest";
import { quadrature } from "../../src/numerics/quadrature.js";

describe("one piece", () => {
  test("is exact for polynomials up to degree 22", () => {
    for (let degree = 0; degree <= 22; degree++) {
      const { value, evaluations } = quadrature((x) => x ** degree, 0, 1, { relative: 1e6 });
      expect(evaluations).toBe(15);
      expect(value * (degree + 1)).toBeCloseTo(1, 14);
    }
  });

  test("estimates its error at 0 to rounding for polynomials up to degree 13 of the 7-point rule", () => {
    for (let degree = 0; degree <= 13; degree++) {
      expect(quadrature((x) => x ** degree, -1, 2, { relative: 1 }).error).toBeLessThan(1e-12);
    }
  });
});

describe("adaptive", () => {
  test.each<[string, (x: number) => number, number, number, number]>([
    ["a peak", (x) => 1 / ((x - 0.3) ** 2 + 1e-6), 0, 1, 1e3 * (Math.atan(700) + Math.atan(300))],
    ["a root", Math.sqrt, 0, 1, 2 / 3],
    ["a pole that can be integrated", (x) => 1 / Math.sqrt(x), 0, 1, 2],
    ["a logarithm", Math.log, 0, 1, -1],
    ["many waves", (x) => Math.cos(100 * x), 0, 1, Math.sin(100) / 100],
    ["a decay to infinity", (x) => Math.exp(-x), 0, Number.POSITIVE_INFINITY, 1],
    [
      "a bell over the whole line",
      (x) => Math.exp(-x * x),
      Number.NEGATIVE_INFINITY,
      Number.POSITIVE_INFINITY,
      Math.sqrt(Math.PI),
    ],
    ["a half line to the left", (x) => 1 / (1 + x * x), Number.NEGATIVE_INFINITY, -1, Math.PI / 4],
  ])("%s to 1e-10", (_name, f, from, to, known) => {
    const result = quadrature(f, from, to);
    expect(result.converged).toBe(true);
    expect(Math.abs(result.value / known - 1)).toBeLessThan(1e-10);
    expect(result.error).toBeGreaterThanOrEqual(Math.abs(result.value - known) / 2 - 1e-15 * Math.abs(known));
  });

  test("a jump at a break costs nothing", () => {
    const step = (x: number): number => (x < 1 / 3 ? 2 : -1);
    const { value, evaluations } = quadrature(step, 0, 1, { breaks: [1 / 3, 7, 1 / 3] });
    expect(value).toBeCloseTo(0, 14);
    expect(evaluations).toBeLessThanOrEqual(30 + 60);
  });

  test("bounds exchanged change the sign; a span of no length is 0", () => {
    expect(quadrature(Math.exp, 1, 0).value).toBeCloseTo(1 - Math.E, 14);
    expect(quadrature(Math.exp, 1, 1).value).toBe(0);
  });
});

describe("failure is an answer", () => {
  test("NaN", () => {
    const result = quadrature(() => Number.NaN, 0, 1);
    expect(result.converged).toBe(false);
    expect(result.value).toBeNaN();
  });

  test("a pole that cannot be integrated", () => {
    expect(quadrature((x) => 1 / x, 0, 1).converged).toBe(false);
  });

  test("too few pieces", () => {
    expect(quadrature((x) => Math.cos(1e4 * x), 0, 1, { maxPieces: 5 }).converged).toBe(false);
  });
});
