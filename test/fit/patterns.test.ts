import { expect, test } from "vitest";
import { patternsOf } from "../../src/fit/patterns.js";
import type { FittedReading } from "../../src/fit/result.js";
import { random } from "../../src/numerics/random.js";

const reading = (residual: Float64Array): FittedReading =>
  ({ key: "a", residual, weight: new Float64Array(residual.length).fill(2) }) as unknown as FittedReading;

test("runs and neighbours, by hand", () => {
  // + + - - - + : 3 runs of 3 plus and 3 minus, 4 expected, variance 6/5.
  const [p] = patternsOf([reading(Float64Array.of(1, 2, -1, -1, -2, 1))]);
  expect(p).toMatchObject({ key: "a", runs: 3, expectedRuns: 4 });
  expect(p.p).toBeCloseTo(0.324, 3);
  expect(p.lag1).toBeCloseTo((2 - 2 + 1 + 2 - 2) / 12, 12);
});

test("independent residuals rarely look as if in runs", () => {
  const draw = random(4);
  const low = Array.from(
    { length: 400 },
    () => patternsOf([reading(new Float64Array(60).map(() => draw.normal()))])[0].p,
  );
  // 5 % of 400 are 20; outside 8 to 35 with probability 0.1 %.
  const count = low.filter((p) => p < 0.05).length;
  expect(count).toBeGreaterThan(7);
  expect(count).toBeLessThan(36);
});
