import { describe, expect, test } from "vitest";
import { linearTheory } from "../../src/fit/covariance.js";

const column = (...values: number[]): Float64Array => Float64Array.from(values);

describe("linear theory", () => {
  test("a straight line: the textbook covariance, and the response to a shift", () => {
    const t = [0, 1, 2, 3, 4];
    const theory = linearTheory([column(1, 1, 1, 1, 1), column(...t)]);
    // (J'J)^-1 with n 5, sum t 10, sum t^2 30: 1 / 50 [[30, -10], [-10, 5]].
    expect(Array.from(theory.inverse)).toEqual([0.6, -0.2, -0.2, 0.1].map((v) => expect.closeTo(v, 12)));
    // A curve moved up by 2 + 3 t is met by moving the line down by as much.
    const answer = theory.respond(column(...t.map((x) => 2 + 3 * x)));
    expect(Array.from(answer)).toEqual([expect.closeTo(-2, 12), expect.closeTo(-3, 12)]);
  });

  test("columns of very different size keep their digits", () => {
    const [a, b] = [
      linearTheory([column(1, 2, 3), column(1, 0, 1)]),
      linearTheory([column(1e9, 2e9, 3e9), column(1e-9, 0, 1e-9)]),
    ];
    expect(b.inverse[0] * 1e18).toBeCloseTo(a.inverse[0], 12);
    expect(b.inverse[3] * 1e-18).toBeCloseTo(a.inverse[3], 12);
  });

  test("what cannot be told is named and leaves the others alone", () => {
    const [u, v] = [column(1, 2, 3, 5), column(1, -1, 1, -1)];
    const theory = linearTheory([u, v, u.map((x) => -2 * x)]);
    expect(theory.rank).toBe(2);
    expect(theory.estimable).toEqual([false, true, false]);
    const [blind] = theory.blind;
    // In shares of the columns' lengths, moving the first and third alike leaves the curve as it is.
    expect(blind[0] / blind[2]).toBeCloseTo(1, 10);
    expect(theory.inverse[0]).toBeNaN();
    expect(theory.inverse[4]).toBeCloseTo(linearTheory([u, v]).inverse[3], 12);
  });

  test("a column of rounding counts as none", () => {
    const theory = linearTheory([column(1, 2, 3), column(1e-12, -1e-12, 1e-12)], [1e-9, 1e-9]);
    expect(theory.estimable).toEqual([true, false]);
  });
});
