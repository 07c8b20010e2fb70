import fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
  applyQ,
  applyTransposedQ,
  entryOfR,
  factorColumns,
  factorQr,
  inverseOfNormal,
  solveLeastSquares,
} from "../../src/numerics/qr.js";
import { contract } from "./linear-solver-contract.js";

contract("Householder QR", (a, n, b) => {
  const qr = factorQr(a, n, n);
  return qr.rank < n ? "singular" : solveLeastSquares(qr, b);
});

const someTall = fc.tuple(fc.integer({ min: 1, max: 12 }), fc.integer({ min: 1, max: 6 })).chain(([m, n]) =>
  fc.record({
    m: fc.constant(m),
    n: fc.constant(n),
    a: fc.array(
      fc.integer({ min: -500, max: 500 }).map((k) => k / 100),
      { minLength: m * n, maxLength: m * n },
    ),
  }),
);

describe("factors", () => {
  test("Q R is A with its columns exchanged, for any shape", () => {
    fc.assert(
      fc.property(someTall, ({ m, n, a }) => {
        const qr = factorQr(a, m, n);
        for (let j = 0; j < n; j++) {
          const column = Float64Array.from({ length: m }, (_, i) => (i < qr.tau.length ? entryOfR(qr, i, j) : 0));
          applyQ(qr, column);
          for (let i = 0; i < m; i++) expect(Math.abs(column[i] - a[i * n + qr.columns[j]])).toBeLessThan(1e-13);
        }
      }),
      { numRuns: 100 },
    );
  });

  test("the diagonal of R does not rise", () => {
    fc.assert(
      fc.property(someTall, ({ m, n, a }) => {
        const qr = factorQr(a, m, n);
        for (let k = 1; k < qr.tau.length; k++) {
          expect(Math.abs(entryOfR(qr, k, k))).toBeLessThanOrEqual(Math.abs(entryOfR(qr, k - 1, k - 1)) * (1 + 1e-12));
        }
      }),
    );
  });

  test("Q turns and Q' turns back, keeping lengths", () => {
    const qr = factorQr([1, 2, 3, 4, 5, 6.5], 3, 2);
    const b = Float64Array.of(1, -2, 3);
    applyTransposedQ(qr, b);
    expect(Math.hypot(...b)).toBeCloseTo(Math.sqrt(14), 14);
    applyQ(qr, b);
    expect(Array.from(b)).toEqual([expect.closeTo(1, 13), expect.closeTo(-2, 13), expect.closeTo(3, 13)]);
  });

  test("columns and rows are two ways to say the same", () => {
    const byRows = factorQr([1, 4, 2, 5, 3, 7], 3, 2);
    const byColumns = factorColumns(Float64Array.of(1, 2, 3, 4, 5, 7), 3, 2);
    expect(byColumns).toEqual(byRows);
  });

  test("huge and tiny numbers neither overflow nor vanish", () => {
    const qr = factorQr([1e200, 0, 1e200, 1e-200], 2, 2, 0);
    expect(Math.abs(entryOfR(qr, 0, 0))).toBeCloseTo(Math.SQRT2 * 1e200, -190);
    expect(qr.rank).toBe(2);
  });
});

describe("rank", () => {
  test.each([
    [[1, 2, 2, 4, 3, 6], 3, 2, 1],
    [[1, 0, 1, 1, 1, 2, 1, 2, 3], 3, 3, 2],
    [[0, 0, 0, 0], 2, 2, 0],
    [[1, 2, 3], 1, 3, 1],
  ])("of %j (%i x %i) is %i", (a, m, n, rank) => {
    expect(factorQr(a, m, n).rank).toBe(rank);
  });

  test("Kahan's matrix, whose norms cancel, keeps falling diagonals", () => {
    const n = 30;
    const [s, c] = [Math.sin(1.2), Math.cos(1.2)];
    const a = new Float64Array(n * n);
    for (let i = 0; i < n; i++) for (let j = i; j < n; j++) a[i * n + j] = s ** i * (j === i ? 1 : -c);
    const qr = factorQr(a, n, n);
    expect(qr.rank).toBe(n);
    for (let k = 0; k < n; k++) expect(Number.isFinite(entryOfR(qr, k, k))).toBe(true);
  });
});

describe("least squares", () => {
  test("the residual is at right angles to every column", () => {
    fc.assert(
      fc.property(someTall, ({ m, n, a }) => {
        const b = Float64Array.from({ length: m }, (_, i) => Math.cos(3 * i) + i);
        const x = solveLeastSquares(factorQr(a, m, n, 1e-10), b);
        const residual = b.map((v, i) => v - x.reduce((sum, xj, j) => sum + a[i * n + j] * xj, 0));
        const size = Math.hypot(...x) * Math.hypot(...a) + Math.hypot(...b);
        for (let j = 0; j < n; j++) {
          const dot = residual.reduce((sum, r, i) => sum + r * a[i * n + j], 0);
          expect(Math.abs(dot)).toBeLessThan(1e-8 * size * (1 + Math.hypot(...a)));
        }
      }),
    );
  });

  test("(A'A)^-1 times A'A is the identity", () => {
    const a = [1, 1, 1, 2, 1, 3, 1, 4.5];
    const inverse = inverseOfNormal(factorQr(a, 4, 2));
    if (inverse === "singular") throw new Error("full rank");
    const sum = (f: (t: number) => number): number => [1, 2, 3, 4.5].reduce((s, t) => s + f(t), 0);
    const [n, st, stt] = [4, sum((t) => t), sum((t) => t * t)];
    const det = n * stt - st * st;
    expect(Array.from(inverse)).toEqual([stt / det, -st / det, -st / det, n / det].map((v) => expect.closeTo(v, 13)));
  });

  test("(A'A)^-1 of dependent columns is an answer", () => {
    expect(inverseOfNormal(factorQr([1, 2, 2, 4, 3, 6], 3, 2))).toBe("singular");
  });
});
