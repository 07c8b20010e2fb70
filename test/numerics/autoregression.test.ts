import fc from "fast-check";
import { describe, expect, test } from "vitest";
import {
  type Chain,
  colour,
  correlate,
  correlationTimes,
  entries,
  links,
  whiten,
} from "../../src/numerics/autoregression.js";
import { random } from "../../src/numerics/random.js";

const chainOf = (gaps: readonly number[]): Chain => ({
  rows: gaps.map((_, i) => i),
  gaps: Float64Array.from(gaps, (g, i) => (i === 0 ? 0 : g)),
});

/** The correlation matrix itself. */
function matrix({ gaps }: Chain, time: number): number[][] {
  let now = 0;
  const at = Array.from(gaps, (g) => {
    now += g;
    return now;
  });
  return at.map((a) => at.map((b) => Math.exp(-Math.abs(a - b) / time)));
}

const someChain = fc.array(fc.double({ min: 0.05, max: 3, noNaN: true }), { minLength: 2, maxLength: 12 });

describe("a chain that hangs together", () => {
  test("by recursion is what its correlation matrix says", () => {
    fc.assert(
      fc.property(someChain, fc.double({ min: 0.1, max: 5, noNaN: true }), (gaps, time) => {
        const chain = chainOf(gaps);
        const phi = links(chain, time);
        const r = matrix(chain, time);
        const v = Float64Array.from(gaps, (_, i) => Math.sin(3 * i + 1));
        const out = new Float64Array(v.length);
        correlate(chain.rows, phi, v, out);
        const product = r.map((row) => row.reduce((s, x, j) => s + x * v[j], 0));
        expect(Math.max(...product.map((x, i) => Math.abs(x - out[i])))).toBeLessThan(1e-10);
        expect(entries(phi, 1)).toBeCloseTo(
          r.flat().reduce((s, x) => s + x, 0),
          10,
        );
        expect(entries(phi, 2)).toBeCloseTo(
          r.flat().reduce((s, x) => s + x * x, 0),
          10,
        );
      }),
    );
  });

  test("is whitened by the inverse of its correlation matrix, and coloured back", () => {
    fc.assert(
      fc.property(someChain, fc.double({ min: 0.1, max: 5, noNaN: true }), (gaps, time) => {
        const chain = chainOf(gaps);
        const phi = links(chain, time);
        const v = Float64Array.from(gaps, (_, i) => Math.cos(2 * i));
        const rv = new Float64Array(v.length);
        correlate(chain.rows, phi, v, rv);
        const [white, other] = [Float64Array.from(v), Float64Array.from(rv)];
        whiten(chain.rows, phi, white);
        whiten(chain.rows, phi, other);
        // (W v) . (W R v) = v' R^-1 R v
        const product = white.reduce((s, x, i) => s + x * other[i], 0);
        expect(product).toBeCloseTo(
          v.reduce((s, x) => s + x * x, 0),
          8,
        );
        colour(chain.rows, phi, white);
        expect(Math.max(...white.map((x, i) => Math.abs(x - v[i])))).toBeLessThan(1e-10);
      }),
    );
  });
});

/** Residuals of a straight line under errors of unit variance that hang together, and the basis of the line. */
function line(seed: number, n: number, phi: number): { residuals: Float64Array; basis: Float64Array[] } {
  const draw = random(seed);
  const errors = Float64Array.from({ length: n }, () => draw.normal());
  colour([...errors.keys()], new Float64Array(n).fill(phi).fill(0, 0, 1), errors);
  const middle = (n - 1) / 2;
  const raw = [new Float64Array(n).fill(1), Float64Array.from({ length: n }, (_, i) => i - middle)];
  const basis = raw.map((q) => {
    const norm = Math.sqrt(q.reduce((s, x) => s + x * x, 0));
    return q.map((x) => x / norm);
  });
  const residuals = Float64Array.from(errors);
  for (const q of basis) {
    const share = q.reduce((s, x, i) => s + x * residuals[i], 0);
    for (let i = 0; i < n; i++) residuals[i] -= share * q[i];
  }
  return { residuals, basis };
}

describe("the correlation time of residuals", () => {
  const n = 60;
  const gaps = [chainOf(new Array<number>(n).fill(1))];
  const typical = (phi: number, restricted: boolean): number => {
    const found = Array.from({ length: 200 }, (_, seed) => {
      const { residuals, basis } = line(seed + 1, n, phi);
      const [{ time }] = correlationTimes(residuals, restricted ? basis : [], gaps);
      return time > 0 ? Math.exp(-1 / time) : 0;
    });
    return found.reduce((s, x) => s + x, 0) / found.length;
  };

  test("is nearer to the truth by restricted likelihood than by the plain one", () => {
    const [restricted, plain] = [typical(0.7, true), typical(0.7, false)];
    expect(plain).toBeLessThan(0.66);
    expect(restricted).toBeGreaterThan(0.66);
    expect(restricted).toBeLessThan(0.75);
  });

  test("of independent ones is seldom told apart from none", () => {
    const gains = Array.from({ length: 200 }, (_, seed) => {
      const { residuals, basis } = line(seed + 1, n, 0);
      return correlationTimes(residuals, basis, gaps)[0].gain;
    });
    // Half of chi-squared of one degree: 4.2 % lie above 3.
    expect(gains.filter((g) => g > 3).length).toBeLessThan(18);
  });

  test("is the same from sums over gaps of a few sorts as member by member", () => {
    for (const [seed, phi] of [
      [5, 0.6],
      [6, 0.95],
      [7, 0],
    ]) {
      const { residuals, basis } = line(seed, n, phi);
      const sorts = Array.from({ length: n }, (_, i) => (i % 7 === 0 ? 0 : i % 3 === 0 ? 2.5 : 1));
      // Each gap a sort of its own: too many for sums.
      const uneven = sorts.map((g, i) => g * (1 + 1e-7 * i));
      const [summed] = correlationTimes(residuals, basis, [chainOf(sorts)]);
      const [walked] = correlationTimes(residuals, basis, [chainOf(uneven)]);
      expect(summed.gain).toBeCloseTo(walked.gain, 3);
      expect(Math.abs(summed.time - walked.time)).toBeLessThan(1e-3 * walked.time + 1e-9);
    }
  });

  test("of two chains are found apart", () => {
    const [a, b] = [line(3, 400, 0.9), line(4, 400, 0)];
    const residuals = Float64Array.from([...a.residuals, ...b.residuals]);
    const second = Array.from({ length: 400 }, (_, i) => 400 + i);
    const step = new Float64Array(400).fill(1);
    const found = correlationTimes(residuals, [], [chainOf([...step]), { rows: second, gaps: step }]);
    expect(Math.exp(-1 / found[0].time)).toBeGreaterThan(0.83);
    expect(found[0].gain).toBeGreaterThan(100);
    expect(found[1].gain).toBeLessThan(6);
  });
});
