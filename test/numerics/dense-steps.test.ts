import fc from "fast-check";
import { expect, test } from "vitest";
import { DenseSteps } from "../../src/numerics/dense-steps.js";
import { exponentialOfTwo } from "../../src/numerics/exponential-of-two.js";

const rate = fc.double({ min: 0, max: 3, noNaN: true });
const slope = fc.double({ min: -2, max: 2, noNaN: true });

/** exp(A h) and its derivatives by the series itself, on steps so short that it is good to rounding, one after the other. */
function bySeries(a: Float64Array, h: number): Float64Array {
  const blocks = a.length / 4;
  const parts = 4096;
  const at = (m: Float64Array, p: number, i: number, j: number): number => m[4 * p + 2 * i + j];
  const product = (x: Float64Array, y: Float64Array): Float64Array =>
    Float64Array.from(x, (_, k) => {
      const [p, i, j] = [k >> 2, (k >> 1) & 1, k & 1];
      let sum = 0;
      for (let l = 0; l < 2; l++) {
        sum += at(x, p, i, l) * at(y, 0, l, j);
        if (p > 0) sum += at(x, 0, i, l) * at(y, p, l, j);
      }
      return sum;
    });
  let term = new Float64Array(4 * blocks);
  term[0] = term[3] = 1;
  let sum = Float64Array.from(term);
  for (let k = 1; k < 12; k++) {
    term = Float64Array.from(product(term, a), (x) => (x * h) / parts / k);
    sum = sum.map((x, i) => x + term[i]);
  }
  for (let d = 0; d < 12; d++) sum = Float64Array.from(product(sum, sum));
  return sum;
}

test("the exponential of two volumes and its derivatives are those of the series, equal rates and still ones too", () => {
  const equal = Float64Array.of(-1, 0, 1, -1, -0.3, 0.2, 0.1, 0.4, 1, 0, 0, 0);
  const still = Float64Array.of(0, 0, 0, 0, -0.3, 0.2, 0.1, 0.4, 1, 0, 0, 0);
  const check = (a: Float64Array, h: number): void => {
    const e = new Float64Array(a.length);
    exponentialOfTwo(a, h, e);
    const expected = bySeries(a, h);
    for (let k = 0; k < e.length; k++) expect(Math.abs(e[k] - expected[k])).toBeLessThan(1e-11 * (k < 4 ? 1 : 1 + h));
  };
  for (const h of [1e-6, 0.3, 5]) for (const a of [equal, still]) check(a, h);
  fc.assert(
    fc.property(
      fc.array(rate, { minLength: 4, maxLength: 4 }),
      fc.array(slope, { minLength: 8, maxLength: 8 }),
      fc.double({ min: 0, max: 10, noNaN: true }),
      ([b, c, x, y], slopes, h) => {
        check(Float64Array.of(-b - x, b, c, -c - y, ...slopes), h);
      },
    ),
  );
});

test("a stepper set on another system of the same order is as one made for it", () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 4 }), fc.infiniteStream(rate), (n, draw) => {
      const matrix = (count: number): Float64Array => {
        const a = Float64Array.from({ length: count * n * n }, () => draw.next().value as number);
        for (let i = 0; i < n; i++) a[i * n + i] = -n * 3;
        return a;
      };
      const used = new DenseSteps(n, matrix(3));
      const v = new Float64Array(3 * n).fill(1);
      for (const h of [0.1, 0.1, 0.1, 0.7]) used.advance(v, h, 1e-12);
      for (const count of [3, 2]) {
        const a = matrix(count);
        used.reset(a);
        const fresh = new DenseSteps(n, a);
        const [x, y] = [new Float64Array(count * n).fill(1), new Float64Array(count * n).fill(1)];
        for (const h of [0.2, 0.1, 0.1, 0.1, 3]) {
          used.advance(x, h, 1e-12);
          fresh.advance(y, h, 1e-12);
        }
        expect(x).toEqual(y);
      }
    }),
    { numRuns: 30 },
  );
});
