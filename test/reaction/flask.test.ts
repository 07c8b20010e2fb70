import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { conservedBy, imbalance } from "../../src/reaction/conserved.js";
import { type Flask, followFlask } from "../../src/reaction/flask.js";
import { chemistryOf, plantOf, power } from "./make.js";

/** Two bodies of 1 and 3 m3 that exchange; A + B -> C, C -> A, 2 A -> D by mass action. */
const flaskWith = (k: readonly number[], start: readonly number[], exchange = 0.2): Flask => {
  const chemistry = chemistryOf(["A", "B", "C", "D"], { k1: k[0], k2: k[1], k3: k[2] }, [
    power(4, [1, 1, 0, 0], [-1, -1, 1, 0]),
    power(5, [0, 0, 1, 0], [1, 0, -1, 0]),
    power(6, [2, 0, 0, 0], [-2, 0, 0, 1]),
  ]);
  const plant = plantOf({
    cells: { a: 1, b: 3 },
    links: [
      ["a", "b", exchange],
      ["b", "a", exchange],
    ],
  });
  return { plant, chemistry, constants: Float64Array.of(...k, Number.NaN), start: Float64Array.from(start) };
};

const times = Float64Array.of(0, 0.1, 1, 10, 100);
const amount = fc.double({ min: 0, max: 5, noNaN: true });
const rate = fc.double({ min: 0.01, max: 20, noNaN: true });

describe("a closed vessel", () => {
  test("keeps what no reaction changes, to 1e-9, and nothing falls below zero by more than rounding", () => {
    const conserved = conservedBy(
      [Float64Array.of(-1, -1, 1, 0), Float64Array.of(1, 0, -1, 0), Float64Array.of(-2, 0, 0, 1)],
      4,
    );
    fc.assert(
      fc.property(fc.tuple(rate, rate, rate), fc.array(amount, { minLength: 8, maxLength: 8 }), (k, start) => {
        const course = followFlask(flaskWith(k, start), times);
        const held = (c: ArrayLike<number>) => Float64Array.from({ length: 4 }, (_, i) => c[i] + 3 * c[4 + i]);
        for (const state of course?.states ?? []) {
          expect(imbalance(conserved, held(Float64Array.from(start)), held(state))).toBeLessThan(1e-9);
          for (const c of state) expect(c).toBeGreaterThan(-1e-8);
        }
        expect(course?.states).toHaveLength(times.length);
      }),
      { numRuns: 30 },
    );
  });

  test("its sensitivities are the differences of whole runs: of a rate, of a start, of the exchange", () => {
    const [k, start] = [
      [2, 0.3, 0.7],
      [1, 1.5, 0.1, 0, 0.2, 0.4, 0, 0.1],
    ];
    const moves = [
      (by: number) => flaskWith([k[0] + by, k[1], k[2]], start),
      (by: number) => flaskWith(k, start.with(1, start[1] + by)),
      (by: number) => flaskWith(k, start, 0.2 + by),
    ];
    const exact = followFlask(
      flaskWith(k, start),
      times,
      moves.map((m) => ({ above: m(1e-5), below: m(-1e-5), by: 1e-5 })),
    );
    moves.forEach((m, d) => {
      const [above, below] = [followFlask(m(1e-3), times), followFlask(m(-1e-3), times)];
      for (const j of times.keys()) {
        for (const [i, s] of (exact?.slopes[d][j] ?? []).entries()) {
          const difference = ((above?.states[j][i] ?? 0) - (below?.states[j][i] ?? 0)) / 2e-3;
          expect(Math.abs(s - difference)).toBeLessThan(1e-5);
        }
      }
    });
  });

  test("2 A -> D alone: 1 / A grows by 2 k t, also far beyond the first half", () => {
    const course = followFlask(flaskWith([0, 0, 0.5], [1, 0, 0, 0, 1, 0, 0, 0]), times);
    for (const [j, t] of times.entries()) expect(1 / (course?.states[j][0] ?? 0)).toBeCloseTo(1 + t, 6);
  });
});
