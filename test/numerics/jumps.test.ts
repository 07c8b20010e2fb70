import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { jumpBetween, suspects } from "../../src/numerics/jumps.js";

describe("jumps", () => {
  test("a jump is found where it is, whatever the curve does beside it", () => {
    const unit = fc.double({ min: 0.05, max: 0.95, noNaN: true });
    fc.assert(
      fc.property(unit, unit, fc.boolean(), (place, slope, up) => {
        const f = (x: number): number => slope * x + (x < place ? 0 : up ? 1 : -2);
        const jump = jumpBetween(f, 0, 1);
        expect(jump?.below).toBeLessThanOrEqual(place);
        expect(jump?.above).toBeGreaterThanOrEqual(place);
        expect((jump?.above ?? 1) - (jump?.below ?? 0)).toBeLessThan(1e-6);
        expect((jump?.after ?? 0) - (jump?.before ?? 0)).toBeCloseTo(up ? 1 : -2, 5);
      }),
      { numRuns: 50 },
    );
  });

  test("what is only steep is no jump, nor is a root that rises upright", () => {
    expect(jumpBetween((x) => Math.tanh(1e3 * (x - 0.4321)), 0, 1)).toBeUndefined();
    expect(jumpBetween((x) => Math.sqrt(Math.max(0, x - 0.3)), 0, 1)).toBeUndefined();
    expect(jumpBetween(() => 1, 0, 1)).toBeUndefined();
  });

  test("up to infinity counts, where there is nothing does not", () => {
    expect(jumpBetween((x) => (x < 0.7 ? 1 : Number.POSITIVE_INFINITY), 0, 1)?.above).toBeCloseTo(0.7, 6);
    expect(jumpBetween((x) => (x < 0.7 ? 1 : Number.NaN), 0, 1)).toBeUndefined();
  });

  test("looked for only where a curve changes more than beside it", () => {
    expect(suspects([0, 1, 2, 3, 4])).toEqual([]);
    expect(suspects([0, 0.1, 5, 5.1])).toEqual([1]);
    expect(suspects([1, 9])).toEqual([0]);
    expect(suspects([2, 2, 2])).toEqual([]);
  });
});
