import fc from "fast-check";
import { expect, test } from "vitest";
import { weights } from "../../src/data/weights.js";

const rising = fc
  .array(fc.double({ min: 0.01, max: 3, noNaN: true }), { minLength: 3, maxLength: 30 })
  .map((steps) => Float64Array.from(steps, (_, i) => steps.slice(0, i + 1).reduce((a, b) => a + b, 0)));

const integral = (t: Float64Array, rule: "trapezoid" | "simpson", f: (x: number) => number): number =>
  weights(t, rule).reduce((sum, w, i) => sum + w * f(t[i]), 0);

test("the trapezoid is exact for lines, Simpson's rule for parabolas, on any spacing and any count of points", () => {
  fc.assert(
    fc.property(rising, (t) => {
      const [a, b] = [t[0], t[t.length - 1]];
      expect(integral(t, "trapezoid", (x) => 3 - 2 * x)).toBeCloseTo(3 * (b - a) - (b * b - a * a), 7);
      const want = (b ** 3 - a ** 3) / 3 - (b * b - a * a) / 2 + b - a;
      expect(Math.abs(integral(t, "simpson", (x) => x * x - x + 1) / want - 1)).toBeLessThan(1e-9);
    }),
  );
});

test("Simpson's rule is exact for cubics on even panels of one size", () => {
  const t = Float64Array.from({ length: 9 }, (_, i) => i / 2);
  expect(integral(t, "simpson", (x) => x ** 3)).toBeCloseTo(64, 12);
});

test("equal times weigh what the points beside them do", () => {
  const t = Float64Array.from([0, 1, 1, 2]);
  for (const rule of ["trapezoid", "simpson"] as const) expect(integral(t, rule, () => 1)).toBeCloseTo(2, 12);
});
