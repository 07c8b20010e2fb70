import { describe, expect, test } from "vitest";
import { dot, orthonormalBasis } from "../../src/fit/basis.js";
import { oneReading } from "../../src/fit/one-reading.js";
import { random } from "../../src/numerics/random.js";
import { networkOf } from "./load.js";
import { every, fitted, noisy, parameterOf, synthetic } from "./synthetic.js";

/** What a straight line through (x, y) leaves: residuals and the basis of its columns. */
function line(x: readonly number[], y: readonly number[]): { basis: Float64Array[]; residuals: Float64Array } {
  const basis = orthonormalBasis([new Float64Array(x.length).fill(1), Float64Array.from(x)]);
  const residuals = Float64Array.from(y);
  for (const b of basis) {
    const share = dot(b, residuals);
    for (let i = 0; i < residuals.length; i++) residuals[i] -= share * b[i];
  }
  return { basis, residuals };
}

const squares = (r: Float64Array): number => dot(r, r);

describe("a reading that rules a straight line", () => {
  const draw = random(11);
  const x = [...Array.from({ length: 20 }, (_, i) => i), 200];
  const y = x.map((v) => 3 + 0.5 * v + 0.1 * draw.normal());

  test("is found where it lies far off the line of the others, with the sum of squares that a fit without it leaves", () => {
    const off = [...y.slice(0, -1), 20];
    const { basis, residuals } = line(x, off);
    const found = oneReading(basis, residuals, x.length, x.length - 2);
    expect(found?.observation).toBe(20);
    const rest = line(x.slice(0, -1), off.slice(0, -1));
    expect(found?.without).toBeCloseTo(squares(rest.residuals), 9);
    // Off by as many standard deviations as its difference from the line of the others has (prediction error of a line).
    const [n, mean] = [20, 9.5];
    const sxx = x.slice(0, -1).reduce((s, v) => s + (v - mean) ** 2, 0);
    const spread = Math.sqrt((squares(rest.residuals) / (n - 2)) * (1 + 1 / n + (200 - mean) ** 2 / sxx));
    const at = y.slice(0, -1);
    const slope = at.reduce((s, v, i) => s + (x[i] - mean) * v, 0) / sxx;
    const said = at.reduce((s, v) => s + v, 0) / n + slope * (200 - mean);
    expect(found?.off).toBeCloseTo(Math.abs(20 - said) / spread, 6);
  });

  test("is none where it lies on that line, however far out it is", () => {
    const { basis, residuals } = line(x, y);
    expect(oneReading(basis, residuals, x.length, x.length - 2)).toBeUndefined();
  });

  test("is none where it has no say: an outlier in the middle", () => {
    const off = y.map((v, i) => (i === 10 ? v + 50 : v));
    const { basis, residuals } = line(x, off);
    expect(oneReading(basis, residuals, x.length, x.length - 2)?.observation).not.toBe(10);
  });
});

const vessel = networkOf(`network: Tank with a bypass
format: 1
parameters:
  slip: {value: 5 %, between: [0 %, 40 %]}
  held: {value: 40 L, between: [5 L, 100 L]}
feeds: {feed: {flow: 3 L/min, to: {out: slip, bulk: rest}}}
compartments: {bulk: {kind: stirred, volume: held, to: out}}
outlets: [out]
`);

describe("a fit of a bypass behind a probe with a lag", () => {
  const times = [0, ...every(0.5, 120)];
  const record = (seed: number, atZero: (truth: number) => number) => {
    const noise = noisy(seed, 0.002);
    return synthetic(
      vessel,
      { slip: 0.12, held: 0.05 },
      {
        injection: "{at: feed, pulse: 20 g}",
        at: "out",
        times,
        reading: ["line: {lag: 0.4 min}"],
        noise: (i, truth) => noise() + (i === 0 ? atZero(truth) - truth : 0),
      },
    );
  };
  const code = "one-reading-rules";

  test("is ruled by the reading at the moment of the injection, taken before the tracer was in, and says so", () => {
    const found = fitted(vessel, [record(1, () => 0)], { starts: 0 });
    const told = found.findings.find((f) => f.code === code);
    expect(told?.message).toContain("at 0 min, the very moment of an injection");
    expect(Number(told?.evidence.share)).toBeGreaterThan(0.9);
    expect(Math.abs(parameterOf(found, "slip").value - 0.12)).toBeGreaterThan(0.02);
  });

  test("says nothing where that reading agrees with the others", () => {
    for (let seed = 1; seed <= 12; seed++) {
      const found = fitted(vessel, [record(seed, (truth) => truth)], { starts: 0 });
      expect(found.findings.map((f) => f.code)).not.toContain(code);
      expect(parameterOf(found, "slip").value).toBeCloseTo(0.12, 2);
    }
  });
});
