import fc from "fast-check";
import { expect, test } from "vitest";
import { denseProducts, padded } from "../../src/numerics/dense-kernels.js";
import { roomFor, Workspace } from "../../src/numerics/wasm/workspace.js";
import { uniformSource } from "../simulate/seeded.js";

test("products of dense matrices by compiled loops are those of the formula, whatever the order", () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 40 }), fc.integer({ min: 1, max: 1e6 }), (n, seed) => {
      const random = uniformSource(seed);
      const m = padded(n);
      const workspace = new Workspace(roomFor({ floats: [m * m, m * m, m * m, m, m] }));
      const [a, b, c] = [0, 1, 2].map(() => workspace.floats(m * m));
      const [x, y] = [workspace.floats(m), workspace.floats(m)];
      for (let i = 0; i < n; i++) {
        x[i] = random() - 0.5;
        for (let j = 0; j < n; j++) {
          a[i * m + j] = random() - 0.5;
          b[i * m + j] = random() - 0.5;
        }
      }
      const products = denseProducts(m, workspace);
      products.apply(a, x, y);
      products.multiply(a, b, c);
      for (let i = 0; i < m; i++) {
        let sum = 0;
        for (let k = 0; k < m; k++) sum += a[i * m + k] * x[k];
        expect(Math.abs(y[i] - sum)).toBeLessThan(1e-14);
        for (let j = 0; j < m; j++) {
          let entry = 0;
          for (let k = 0; k < m; k++) entry += a[i * m + k] * b[k * m + j];
          expect(Math.abs(c[i * m + j] - entry)).toBeLessThan(1e-14);
        }
      }
    }),
    { numRuns: 25 },
  );
});
