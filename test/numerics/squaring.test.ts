import { expect, test } from "vitest";
import { sparseRows } from "../../src/numerics/sparse.js";
import { denseStep } from "../../src/numerics/squaring.js";

/**
 * A cell of 1 m3 fed and left by 1 m3/s, and a nook of 2^-20 m3 that exchanges 2^20 m3/s with it: rates 2^40 apart, all
 * sums exact in binary. By hand: the slow rate is the product of both over the fast one.
 */
const exchange = 2 ** 20;
const nook = 2 ** -20;
const turn = exchange / nook;
const fast = (1 + exchange + turn + Math.sqrt((1 + exchange + turn) ** 2 - 4 * turn)) / 2;
const slow = turn / fast;
const weight = (fast - 1) / (fast - slow);
const rows = (drive: number) => [
  new Map([[0, -(1 + exchange)], [1, exchange], ...(drive > 0 ? ([[2, drive]] as const) : [])]),
  new Map([
    [0, turn],
    [1, -turn],
  ]),
];

test("a full vessel empties by its slow rate, whatever turns over 1e12 times as fast in it", () => {
  for (const h of [0.1, 1, 7]) {
    const { exponential } = denseStep(sparseRows(rows(0)), h);
    expect((exponential[0] + exponential[1]) / (weight * Math.exp(-slow * h)) - 1).toBeCloseTo(0, 12);
  }
});

test("driven for long it fills to what drives it", () => {
  const driven = sparseRows([...rows(1), new Map([[3, 1]]), new Map()]);
  const { exponential } = denseStep(driven, 40);
  expect(exponential[2] - 1).toBeCloseTo(0, 12);
  expect(exponential[2 * 4 + 2]).toBe(1);
  expect(exponential[2 * 4 + 3] / 40 - 1).toBeCloseTo(0, 12);
});

test("where concentrations may also rise, as of what settles, the step is what it was: doubled", () => {
  const { exponential } = denseStep(
    sparseRows([
      new Map([[0, -2]]),
      new Map([
        [0, 6],
        [1, -3],
      ]),
    ]),
    20,
  );
  expect(exponential[0] / Math.exp(-40) - 1).toBeCloseTo(0, 12);
  expect(exponential[2] / (6 * (Math.exp(-40) - Math.exp(-60))) - 1).toBeCloseTo(0, 12);
});
