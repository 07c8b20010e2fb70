import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { conservedBy, imbalance } from "../../src/reaction/conserved.js";

/** Whole numbers, as stoichiometry has them; species in measures that lie decades apart, as counts and grams do. */
const cases = fc.record({
  numbers: fc.array(fc.array(fc.integer({ min: -2, max: 2 }), { minLength: 4, maxLength: 4 }), {
    minLength: 1,
    maxLength: 4,
  }),
  decades: fc.array(fc.integer({ min: -12, max: 12 }), { minLength: 4, maxLength: 4 }),
  extents: fc.array(fc.double({ min: 0.1, max: 1, noNaN: true }), { minLength: 4, maxLength: 4 }),
});

describe("what reactions leave alone", () => {
  test("does not hang on the units of the species", () => {
    fc.assert(
      fc.property(cases, ({ numbers, decades, extents }) => {
        const plain = conservedBy(
          numbers.map((row) => Float64Array.from(row)),
          4,
        );
        const inUnits = numbers.map((row) => Float64Array.from(row, (x, i) => x * 10 ** decades[i]));
        const scaled = conservedBy(inUnits, 4);
        expect(scaled.free.length).toBe(plain.free.length);
        // Whatever the reactions make of a feed, the sums that none of them changes stay what they were.
        const fed = Float64Array.from(decades, (d) => 10 * 10 ** d);
        const left = fed.map((f, i) => f + inUnits.reduce((sum, row, r) => sum + extents[r] * row[i], 0));
        expect(imbalance(scaled, fed, left)).toBeLessThan(1e-9);
      }),
    );
  });

  test("organisms that are counted and a disinfectant that is weighed both move freely", () => {
    const rows = [Float64Array.of(-1e-9, 0), Float64Array.of(0, -500)];
    expect([...conservedBy(rows, 2).free].sort()).toEqual([0, 1]);
  });
});
