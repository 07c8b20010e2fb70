import fc from "fast-check";
import { expect, test } from "vitest";
import { svd } from "../../src/numerics/svd.js";

const someTall = fc.tuple(fc.integer({ min: 1, max: 10 }), fc.integer({ min: 0, max: 5 })).chain(([n, more]) =>
  fc.record({
    m: fc.constant(n + more),
    n: fc.constant(n),
    a: fc.array(
      fc.integer({ min: -500, max: 500 }).map((k) => k / 100),
      { minLength: (n + more) * n, maxLength: (n + more) * n },
    ),
  }),
);

test("U S V' is A, V turns lengths into themselves, singular values fall", () => {
  fc.assert(
    fc.property(someTall, ({ m, n, a }) => {
      const { u, singular, v } = svd(a, m, n);
      for (let i = 0; i < m; i++) {
        for (let j = 0; j < n; j++) {
          let sum = 0;
          for (let k = 0; k < n; k++) sum += u[i * n + k] * singular[k] * v[j * n + k];
          expect(Math.abs(sum - a[i * n + j])).toBeLessThan(1e-13);
        }
      }
      for (let p = 0; p < n; p++) {
        if (p > 0) expect(singular[p]).toBeLessThanOrEqual(singular[p - 1]);
        for (let q = 0; q < n; q++) {
          let dot = 0;
          for (let i = 0; i < n; i++) dot += v[i * n + p] * v[i * n + q];
          expect(Math.abs(dot - (p === q ? 1 : 0))).toBeLessThan(1e-13);
        }
      }
    }),
    { numRuns: 60 },
  );
});

test("singular values of the Hilbert matrix of order 4", () => {
  // Published: R.T. Gregory, D.L. Karney, A Collection of Matrices for Testing Computational Algorithms, Wiley 1969 (from memory, 8 digits).
  const a = Array.from({ length: 16 }, (_, k) => 1 / (Math.floor(k / 4) + (k % 4) + 1));
  const { singular } = svd(a, 4, 4);
  const known = [1.50021428, 0.16914122, 0.00673827, 0.0000967023];
  for (const [k, value] of known.entries()) expect(singular[k]).toBeCloseTo(value, 8);
});

test("small singular values of badly scaled columns keep their digits", () => {
  const { singular } = svd([1, 1e-9, 1, -1e-9], 2, 2);
  expect(singular[1] / (Math.SQRT2 * 1e-9)).toBeCloseTo(1, 14);
});

test("more columns than rows is a mistake of the caller", () => {
  expect(() => svd([1, 2], 1, 2)).toThrow(RangeError);
});
