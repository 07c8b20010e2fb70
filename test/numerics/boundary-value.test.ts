import { expect, test } from "vitest";
import { type BoundaryProblem, solveBoundary } from "../../src/numerics/boundary-value.js";
import { meshOf } from "../../src/numerics/collocation.js";

/**
 * w'' = 3/2 w^2, w(0) = 4, w(1) = 1, with solution 4 / (1 + x)^2, in v = w - 1.
 * J. Stoer, R. Bulirsch, Introduction to Numerical Analysis, Springer, sec. 7.3 (from memory, held by the identity)
 */
const textbook = (start: number): BoundaryProblem => ({
  size: 2,
  rhs(y, at, out, to) {
    out[to] = y[at + 1];
    out[to + 1] = 1.5 * (y[at] + 1) ** 2;
  },
  jacobian: (y, at, out, to) => out.set([0, 1, 3 * (y[at] + 1), 0], to),
  left: Float64Array.of(1, 0),
  fed: Float64Array.of(start),
  right: Float64Array.of(1, 0),
  positive: 0,
});
const guess = meshOf(Float64Array.of(0, 0.5, 1), 2, (x) => [3 * (1 - x), -3]);

test("a textbook problem, its end and how the end moves with the start", () => {
  const solved = [3, 3 + 1e-5, 3 - 1e-5].map((start) => solveBoundary(textbook(start), guess));
  const [here, above, below] = solved.map((s) => s?.end[1] ?? Number.NaN);
  expect(Math.abs(here + 1)).toBeLessThan(1e-12); // w' = -8 / (1 + x)^3
  const slope = solved[0]?.sensitivity() ?? [];
  expect(slope[1]).toBeCloseTo((above - below) / 2e-5, 6);
  expect(slope[0]).toBeCloseTo(0, 12);
});

test.each([1, 30, 1e3, 1e6])("a layer of thickness 1/%d at the right end is found and followed", (steep) => {
  // u' = steep (u - j), j' = -j: j = e^-x, u(1) = 0.
  const problem: BoundaryProblem = {
    size: 2,
    rhs(y, at, out, to) {
      out[to] = steep * (y[at] - y[at + 1]);
      out[to + 1] = -y[at + 1];
    },
    jacobian: (_y, _at, out, to) => out.set([steep, -steep, 0, -1], to),
    left: Float64Array.of(0, 1),
    fed: Float64Array.of(1),
    right: Float64Array.of(1, 0),
    positive: 0,
  };
  const solution = solveBoundary(problem, guess);
  if (!solution) throw new Error("no solution");
  const { mesh, end } = solution;
  expect(end[1]).toBeCloseTo(Math.exp(-1), 13);
  const atStart = mesh.values[6 * 2]; // the last point of the first stretch is 0
  const law = (x: number): number => (steep / (steep + 1)) * (Math.exp(-x) - Math.exp(-1 - steep * (1 - x)));
  expect(Math.abs(atStart - law(0))).toBeLessThan(1e-12);
});

test("conditions that leave the right end open have no one solution, and that is said", () => {
  expect(solveBoundary({ ...textbook(3), right: Float64Array.of(0, 0) }, guess)).toBeUndefined();
});
