import fc from "fast-check";
import { expect, test } from "vitest";

/** Solves A x = b for a square row-major matrix; every dense solver must keep these promises. */
export type SquareSolver = (a: Float64Array, n: number, b: Float64Array) => Float64Array | "singular";

/** |b - A x| / (|A| |x| + |b|), infinity norms. */
export function backwardError(a: Float64Array, n: number, x: Float64Array, b: Float64Array): number {
  let residual = 0;
  let size = 0;
  for (let i = 0; i < n; i++) {
    let sum = -b[i];
    let row = 0;
    for (let j = 0; j < n; j++) {
      sum += a[i * n + j] * x[j];
      row += Math.abs(a[i * n + j]);
    }
    residual = Math.max(residual, Math.abs(sum));
    size = Math.max(size, row);
  }
  const largest = (v: Float64Array): number => v.reduce((m, e) => Math.max(m, Math.abs(e)), 0);
  return residual / (size * largest(x) + largest(b) || 1);
}

export const someMatrix = fc.integer({ min: 1, max: 12 }).chain((n) => {
  const entry = fc.integer({ min: -1000, max: 1000 }).map((k) => k / 100);
  return fc.record({
    n: fc.constant(n),
    // 25 on the diagonal keeps it far enough from singular
    a: fc
      .array(entry, { minLength: n * n, maxLength: n * n })
      .map((v) => Float64Array.from(v, (x, k) => (k % (n + 1) === 0 ? x + 25 : x))),
    b: fc.array(entry, { minLength: n, maxLength: n }).map((v) => Float64Array.from(v)),
  });
});

export function contract(name: string, solver: SquareSolver): void {
  test(`${name}: backward error near rounding, for any matrix not singular`, () => {
    fc.assert(
      fc.property(someMatrix, ({ n, a, b }) => {
        const x = solver(a, n, b.slice());
        if (x === "singular") throw new Error("not singular");
        expect(backwardError(a, n, x, b)).toBeLessThan(1e-14);
      }),
      { numRuns: 60 },
    );
  });

  test(`${name}: a zero on the diagonal is no obstacle`, () => {
    expect(solver(Float64Array.of(0, 2, 3, 0), 2, Float64Array.of(4, 9))).toEqual(Float64Array.of(3, 2));
  });

  test(`${name}: the Hilbert matrix of order 6 to what its condition of 1.5e7 leaves`, () => {
    const n = 6;
    const a = Float64Array.from({ length: n * n }, (_, k) => 1 / (Math.floor(k / n) + (k % n) + 1));
    const b = new Float64Array(n);
    for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) b[i] += a[i * n + j];
    const x = solver(a, n, b);
    if (x === "singular") throw new Error("not singular");
    for (const v of x) expect(Math.abs(v - 1)).toBeLessThan(1e-8);
  });

  test.each([
    ["zeros", Float64Array.of(0, 0, 0, 0, 0, 0, 0, 0, 0)],
    ["a row of zeros", Float64Array.of(1, 2, 3, 0, 0, 0, 4, 5, 6)],
    ["dependent rows", Float64Array.of(1, 2, 3, 4, 5, 6, 7, 8, 9)],
    ["not a number", Float64Array.of(1, 2, 3, 4, Number.NaN, 6, 7, 8, 10)],
  ])(`${name}: a singular matrix is an answer: %s`, (_name, a) => {
    expect(solver(a, 3, Float64Array.of(1, 2, 3))).toBe("singular");
  });

  test(`${name}: leaves the matrix as it is`, () => {
    const a = Float64Array.of(4, 1, 2, 3);
    solver(a, 2, Float64Array.of(1, 1));
    expect(a).toEqual(Float64Array.of(4, 1, 2, 3));
  });

  test(`${name}: no unknowns`, () => {
    expect(solver(new Float64Array(0), 0, new Float64Array(0))).toEqual(new Float64Array(0));
  });
}
