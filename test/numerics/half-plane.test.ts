import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type ComplexBuffer, determinantDirection, zerosRightOf } from "../../src/numerics/half-plane.js";

/** A real polynomial by its zeros, over one of the same degree with all zeros at -1. */
const ratio = (zeros: readonly (readonly [number, number])[]) => (re: number, im: number, out: ComplexBuffer) => {
  [out.re, out.im] = [1, 0];
  for (const [a, b] of zeros) {
    const [x, y, u, v] = [re - a, im - b, re + 1, im];
    const d = u * u + v * v;
    const [p, q] = [(x * u + y * v) / d, (y * u - x * v) / d];
    [out.re, out.im] = [out.re * p - out.im * q, out.re * q + out.im * p];
  }
};

describe("zeros in a half-plane", () => {
  test("of a ratio of polynomials: as many as were put there", () => {
    const place = fc.double({ min: -3, max: 3, noNaN: true }).filter((x) => Math.abs(x) > 0.01);
    const pair = fc.tuple(place, fc.double({ min: 0.05, max: 5, noNaN: true }));
    fc.assert(
      fc.property(fc.array(place, { maxLength: 3 }), fc.array(pair, { maxLength: 3 }), (real, pairs) => {
        const zeros = [
          ...real.map((x) => [x, 0] as const),
          ...pairs.flatMap(([x, y]) => [[x, y] as const, [x, -y] as const]),
        ];
        expect(zerosRightOf(ratio(zeros), 0, 50, 1)).toBe(zeros.filter(([x]) => x > 0).length);
      }),
      { numRuns: 60 },
    );
  });

  test("of 1 - a exp(-s): ln a + 2 pi i k, all on one line", () => {
    const echo = (a: number) => (re: number, im: number, out: ComplexBuffer) => {
      out.re = 1 - a * Math.exp(-re) * Math.cos(im);
      out.im = a * Math.exp(-re) * Math.sin(im);
    };
    const radius = 5.5 * 2 * Math.PI;
    for (const a of [0.3, 0.9, 0.999]) expect(zerosRightOf(echo(a), 0, radius, 1)).toBe(0);
    for (const a of [1.001, 1.1, 3]) expect(zerosRightOf(echo(a), 0, radius, 1)).toBe(11);
    expect(zerosRightOf(echo(0.5), Math.log(0.5) - 1e-4, radius, 1)).toBe(11);
    expect(zerosRightOf(echo(0.5), Math.log(0.5) + 1e-4, radius, 1)).toBe(0);
  });

  test("the direction of a determinant, against its expansion", () => {
    const number = fc.double({ min: -2, max: 2, noNaN: true });
    fc.assert(
      fc.property(fc.array(number, { minLength: 8, maxLength: 8 }), ([a, b, c, d, e, f, g, h]) => {
        const out = { re: 0, im: 0 };
        const [re, im] = [a * g - b * h - (c * e - d * f), a * h + b * g - (c * f + d * e)];
        fc.pre(Math.hypot(re, im) > 1e-6);
        determinantDirection(Float64Array.of(a, c, e, g), Float64Array.of(b, d, f, h), 2, out);
        const size = Math.hypot(re, im);
        expect(out.re).toBeCloseTo(re / size, 7);
        expect(out.im).toBeCloseTo(im / size, 7);
      }),
    );
  });
});
