import fc from "fast-check";
import { expect, test } from "vitest";
import { determinant, factor, solve, solveTransposed } from "../../src/numerics/lu.js";
import { backwardError, contract, someMatrix } from "./linear-solver-contract.js";

contract("dense LU", (a, n, b) => {
  const lu = factor(a, n);
  if (lu === "singular") return lu;
  solve(lu, b);
  return b;
});

contract("dense LU, transposed twice", (a, n, b) => {
  const lu = factor(transposed(a, n), n);
  if (lu === "singular") return lu;
  solveTransposed(lu, b);
  return b;
});

test("solves the matrix and its transpose with the same factors", () => {
  fc.assert(
    fc.property(someMatrix, ({ n, a, b }) => {
      const lu = factor(a, n);
      if (lu === "singular") throw new Error("not singular");
      const x = b.slice();
      solveTransposed(lu, x);
      expect(backwardError(transposed(a, n), n, x, b)).toBeLessThan(1e-14);
    }),
    { numRuns: 60 },
  );
});

test("the determinant keeps the sign of the row exchanges", () => {
  const lu = factor([0, 2, 0, 3, 0, 0, 0, 0, 4], 3);
  if (lu === "singular") throw new Error("not singular");
  expect(determinant(lu)).toBeCloseTo(-24, 12);
});

test.each([
  ["rows", [1e-20, 1e-20, 1, -1], [3e-20, -1], [1, 2]],
  ["columns", [1e-20, 1, 1e-20, -1], [3, -1], [1e20, 2]],
])("a bad scale between %s is no obstacle", (_name, a, b, x) => {
  const lu = factor(a, 2);
  if (lu === "singular") throw new Error("not singular");
  const found = Float64Array.from(b);
  solve(lu, found);
  for (const [i, v] of x.entries()) expect(found[i] / v).toBeCloseTo(1, 13);
});

test("a closed loop of flows, which determines nothing, is singular at any size", () => {
  // each of n vessels passes all it gets to the next
  for (const n of [2, 7, 50]) {
    const a = new Float64Array(n * n);
    for (let i = 0; i < n; i++) {
      a[i * n + i] = 0.1;
      a[i * n + ((i + n - 1) % n)] -= 0.1;
    }
    expect(factor(a, n)).toBe("singular");
  }
});

test("a matrix of tiny numbers is not singular for that", () => {
  expect(factor([1e-200, 0, 0, 1e-180], 2)).not.toBe("singular");
});

function transposed(a: Float64Array, n: number): Float64Array {
  return a.map((_, k) => a[(k % n) * n + Math.floor(k / n)]);
}
