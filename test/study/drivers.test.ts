import { expect, test } from "vitest";
import { random } from "../../src/numerics/random.js";
import { driversOf } from "../../src/study/drivers.js";

const source = random(5);
const inputs = Array.from({ length: 400 }, () => ({
  a: source.normal(),
  b: source.normal(),
  c: source.normal(),
  fixed: 3,
}));

test("shares of a sum of independent inputs are those of their variances", () => {
  const found = driversOf(
    inputs,
    inputs.map(({ a, b }) => 2 * a + b),
  );
  expect(found.map((d) => d.name)).toEqual(["a", "b"]);
  // For normal inputs the rank correlation is (6/pi) asin(r/2) of the correlation r (Pearson 1907): 0.88 for 2/sqrt 5.
  expect(found[0].share).toBeCloseTo(((6 / Math.PI) * Math.asin(1 / Math.sqrt(5))) ** 2, 1);
  expect(found[1].share).toBeCloseTo(((6 / Math.PI) * Math.asin(0.5 / Math.sqrt(5))) ** 2, 1);
});

test("a bent but rising law hides nothing; draws that failed are passed over; few draws say nothing", () => {
  const values = inputs.map(({ c }, i) => (i % 9 === 0 ? undefined : Math.exp(3 * c)));
  expect(driversOf(inputs, values)[0]).toEqual({ name: "c", share: expect.closeTo(1, 12) });
  expect(driversOf(inputs.slice(0, 15), values.slice(0, 15))).toEqual([]);
  expect(
    driversOf(
      inputs,
      inputs.map(() => 1),
    ),
  ).toEqual([]);
});
