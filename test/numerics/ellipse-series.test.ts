import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { EllipseSeries } from "../../src/numerics/ellipse-series.js";

/** The polynomials at a complex point, by their recurrence: [real, imaginary] of a sum of coefficients times them. */
function at(c: Float64Array, { half: a, height: b }: { half: number; height: number }, re: number, im: number) {
  let [pr, pi, qr, qi] = [1, 0, 0, 0];
  let [sr, si] = [0, 0];
  for (let k = 0; k < c.length; k++) {
    sr += c[k] * pr;
    si += c[k] * pi;
    const f = (k === 0 ? 1 : 2) / (a + b);
    const g = k === 0 ? 0 : (a - b) / (a + b);
    const [nr, ni] = [f * ((re + a) * pr - im * pi) - g * qr, f * ((re + a) * pi + im * pr) - g * qi];
    [qr, qi, pr, pi] = [pr, pi, nr, ni];
  }
  return [sr, si];
}

const cases = fc.record({
  half: fc.constantFrom(0.1, 1, 30),
  flat: fc.double({ min: 0, max: 1, noNaN: true }),
  angle: fc.double({ min: 0, max: 2 * Math.PI, noNaN: true }),
  depth: fc.double({ min: 0, max: 1, noNaN: true }),
  span: fc.constantFrom(1e-3, 0.5, 7, 200, 3000),
});

describe("the series on an ellipse", () => {
  test("is exp(t z) anywhere in it, and its integrals, however flat the ellipse and however long the time", () => {
    fc.assert(
      fc.property(cases, ({ half, flat, angle, depth, span }) => {
        const ellipse = { half, height: flat * half };
        const series = new EllipseSeries(ellipse);
        const t = span / half;
        const [re, im] = [half * (depth * Math.cos(angle) - 1), ellipse.height * depth * Math.sin(angle)];
        const c = series.exponential(t);
        const [er, ei] = [Math.exp(t * re) * Math.cos(t * im), Math.exp(t * re) * Math.sin(t * im)];
        const [cr, ci] = at(c, ellipse, re, im);
        expect(Math.hypot(cr - er, ci - ei)).toBeLessThan(5e-11);
        if (Math.hypot(re, im) * t < 1e-3) return;
        // (exp(t z) - 1) / z, and from that (f - t) / z
        const divide = (x: number, y: number) => {
          const square = re * re + im * im;
          return [(x * re + y * im) / square, (y * re - x * im) / square];
        };
        const first = series.integral(c, 1, t);
        const wanted = divide(er - 1, ei);
        const [fr, fi] = at(first, ellipse, re, im);
        expect(Math.hypot(fr - wanted[0], fi - wanted[1])).toBeLessThan(1e-9 * t);
      }),
      { numRuns: 300 },
    );
  });

  test("at z = 0 it is 1, its integrals t and t^2/2", () => {
    for (const height of [0, 0.3, 1]) {
      const series = new EllipseSeries({ half: 1, height });
      const c = series.exponential(40);
      expect(at(c, { half: 1, height }, 0, 0)[0]).toBeCloseTo(1, 10);
      const first = series.integral(c, 1, 40);
      expect(at(first, { half: 1, height }, 0, 0)[0] / 40).toBeCloseTo(1, 9);
      expect(at(series.integral(first, 2, 40), { half: 1, height }, 0, 0)[0] / 800).toBeCloseTo(1, 8);
    }
  });

  test("as high as wide it is the Poisson series, thin it takes a few times the root of rate and time", () => {
    const poisson = new EllipseSeries({ half: 1, height: 1 }).exponential(3);
    for (let k = 0; k < 8; k++) {
      const factorial = [1, 1, 2, 6, 24, 120, 720, 5040][k];
      // p_k is half a power there, but for k = 0.
      expect(poisson[k]).toBeCloseTo(((k === 0 ? 1 : 2) * Math.exp(-3) * 3 ** k) / factorial, 14);
    }
    expect(new EllipseSeries({ half: 1, height: 0 }).exponential(10_000).length).toBeLessThan(10 * Math.sqrt(10_000));
  });
});
