import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { eigenvalues } from "../../src/numerics/eigenvalues.js";

const sorted = (a: number[], n: number): [number, number][] => {
  const found = eigenvalues(Float64Array.from(a), n);
  if (!found) throw new Error("did not settle");
  const all = [...found.real].map((re, i): [number, number] => [re, found.imaginary[i]]);
  return all.sort((p, q) => p[0] - q[0] || p[1] - q[1]);
};

const near = (found: [number, number][], expected: [number, number][], tolerance: number): void => {
  expect(found.length).toBe(expected.length);
  found.forEach(([re, im], i) => {
    expect(Math.hypot(re - expected[i][0], im - expected[i][1])).toBeLessThan(tolerance);
  });
};

describe("eigenvalues of a dense matrix", () => {
  test("of small ones in closed form", () => {
    near(sorted([5], 1), [[5, 0]], 1e-15);
    near(
      sorted([0, 1, -1, 0], 2),
      [
        [0, -1],
        [0, 1],
      ],
      1e-15,
    );
    near(
      sorted([2, 1, 1, 2], 2),
      [
        [1, 0],
        [3, 0],
      ],
      1e-14,
    );
    // A rotation of three axes: 1, and exp(+-2 pi i / 3).
    near(
      sorted([0, 0, 1, 1, 0, 0, 0, 1, 0], 3),
      [
        [-0.5, -Math.sqrt(3) / 2],
        [-0.5, Math.sqrt(3) / 2],
        [1, 0],
      ],
      1e-14,
    );
  });

  test("of a chain of n tanks with exchange: 2 - 2 cos(pi k / n), twice reflected ends", () => {
    const n = 30;
    const a = Array.from({ length: n * n }, (_, e) => {
      const [i, j] = [Math.floor(e / n), e % n];
      if (i === j) return i === 0 || i === n - 1 ? 1 : 2;
      return Math.abs(i - j) === 1 ? -1 : 0;
    });
    const expected = Array.from({ length: n }, (_, k): [number, number] => [2 - 2 * Math.cos((Math.PI * k) / n), 0]);
    near(sorted(a, n), expected, 1e-13);
  });

  test("trace and sum of squares are those of the matrix, and real matrices have conjugate pairs", () => {
    const matrix = fc
      .integer({ min: 1, max: 14 })
      .chain((n) => fc.array(fc.double({ min: -5, max: 5, noNaN: true }), { minLength: n * n, maxLength: n * n }));
    fc.assert(
      fc.property(matrix, (a) => {
        const n = Math.sqrt(a.length);
        const found = sorted(a, n);
        let [trace, squares] = [0, 0];
        for (let i = 0; i < n; i++) {
          trace += a[i * n + i];
          for (let j = 0; j < n; j++) squares += a[i * n + j] * a[j * n + i];
        }
        const size = 1 + Math.hypot(...a);
        expect(Math.abs(found.reduce((s, [re]) => s + re, 0) - trace)).toBeLessThan(1e-12 * size);
        expect(Math.abs(found.reduce((s, [, im]) => s + im, 0))).toBeLessThan(1e-12 * size);
        expect(Math.abs(found.reduce((s, [re, im]) => s + re * re - im * im, 0) - squares)).toBeLessThan(
          1e-11 * size ** 2,
        );
      }),
      { numRuns: 200, seed: 3 },
    );
  });

  test("of a triangular matrix turned about are its diagonal", () => {
    const n = 6;
    const diagonal = [-3, -1, 0.5, 2, 7, 40];
    // S T S^-1 with S = I + e u^T, S^-1 = I - e u^T / (1 + u.e)
    const u = [0.3, -0.2, 0.5, 0.1, -0.4, 0.2];
    const at = (i: number, j: number): number => (i === j ? diagonal[i] : j > i ? 0.7 * (i + 1) - j : 0);
    const id = (i: number, j: number): number => (i === j ? 1 : 0);
    const total = 1 + u.reduce((s, x) => s + x, 0);
    const product = (f: (i: number, j: number) => number, g: (i: number, j: number) => number) => {
      const m = Array.from({ length: n * n }, (_, e) => {
        let sum = 0;
        for (let k = 0; k < n; k++) sum += f(Math.floor(e / n), k) * g(k, e % n);
        return sum;
      });
      return (i: number, j: number): number => m[i * n + j];
    };
    const whole = product(
      product((i, j) => id(i, j) + u[j], at),
      (i, j) => id(i, j) - u[j] / total,
    );
    const a = Array.from({ length: n * n }, (_, e) => whole(Math.floor(e / n), e % n));
    near(
      sorted(a, n),
      diagonal.map((x): [number, number] => [x, 0]),
      1e-11,
    );
  });

  test("what is no number has none", () => {
    expect(eigenvalues(Float64Array.of(1, Number.NaN, 0, 1), 2)).toBeUndefined();
  });
});
