import { describe, expect, test } from "vitest";
import { findPattern } from "../../src/numerics/dependence.js";
import { integrate } from "../../src/numerics/integrate.js";

/** Heat conduction along a rod of length 1 between two cold ends, by differences. */
function rod(n: number) {
  const dx = 1 / (n + 1);
  const rate = (k: number): number => (2 - 2 * Math.cos(k * Math.PI * dx)) / dx / dx;
  const mode = (k: number, i: number): number => Math.sin(k * Math.PI * (i + 1) * dx);
  return {
    start: Float64Array.from({ length: n }, (_, i) => mode(1, i) + mode(3, i) / 2),
    rhs: (_: number, y: Float64Array, dy: Float64Array): void => {
      for (let i = 0; i < n; i++) dy[i] = ((i > 0 ? y[i - 1] : 0) - 2 * y[i] + (i < n - 1 ? y[i + 1] : 0)) / dx / dx;
    },
    at: (t: number, i: number): number =>
      mode(1, i) * Math.exp(-rate(1) * t) + (mode(3, i) / 2) * Math.exp(-rate(3) * t),
  };
}

describe.each([100, 1000])("conduction between %d nodes, nothing said of its Jacobian", (n) => {
  test("turns implicit by itself, in few evaluations, and meets its closed form", () => {
    const { rhs, start, at } = rod(n);
    const result = integrate({ rhs, start, from: 0, to: 0.2, relative: 1e-8, absolute: 1e-10 });
    expect(result.end).toBe("reached");
    expect(result.stats.method).toBe("both");
    expect(result.stats.rhs).toBeLessThan(1000 + 6 * n);
    result.last.forEach((y, i) => {
      expect(Math.abs(y - at(0.2, i))).toBeLessThan(1e-8);
    });
  });
});

test("a pattern holds all on which a derivative may hang, also what hangs on a sign", () => {
  const n = 30;
  const upwind = (_: number, y: Float64Array, dy: Float64Array): void => {
    for (let i = 0; i < n; i++) {
      const [left, right] = [y[(i + n - 1) % n], y[(i + 1) % n]];
      dy[i] = y[i] > 0 ? y[i] * (left - y[i]) : y[i] * (y[i] - right);
    }
  };
  const pattern = findPattern(upwind, 0, new Float64Array(n).fill(1));
  const missing = Array.from({ length: n }, (_, i) => {
    const row = pattern?.column.subarray(pattern.start[i], pattern.start[i + 1]);
    return [i, (i + 1) % n, (i + n - 1) % n].filter((j) => !row?.includes(j));
  });
  expect(missing.flat()).toEqual([]);
});

test("no pattern where all hang on all, or where states that are no numbers are refused", () => {
  const y = new Float64Array(20).fill(1);
  const all = (_: number, y: Float64Array, dy: Float64Array): void => {
    dy.fill(y.reduce((a, b) => a + b, 0));
  };
  const strict = (_: number, y: Float64Array, dy: Float64Array): void => {
    if (!y.every(Number.isFinite)) throw new Error("not a number");
    dy.set(y);
  };
  expect(findPattern(all, 0, y)).toBeUndefined();
  expect(findPattern(strict, 0, y)).toBeUndefined();
});
