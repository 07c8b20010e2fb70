import { describe, expect, test } from "vitest";
import { autocorrelationOf } from "../../src/fit/autocorrelation.js";
import { orthonormalBasis } from "../../src/fit/basis.js";
import type { Block } from "../../src/fit/observations.js";
import { random } from "../../src/numerics/random.js";
import { networkOf } from "./load.js";
import { every, fitted, parameterOf, synthetic } from "./synthetic.js";

const tank = networkOf(`network: One tank
format: 1
parameters:
  held: {value: 150 L, between: [10 L, 500 L]}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments: {bulk: {kind: stirred, volume: held, to: out}}
outlets: [out]
`);

/** A test whose errors hang together with a time of 2 min, read every quarter of a minute. */
function trial(seed: number, correlated: string, count = 120) {
  const draw = random(seed);
  const phi = Math.exp(-0.25 / 2);
  let last = draw.normal();
  return synthetic(
    tank,
    { held: 0.1 },
    {
      injection: "{at: feed, pulse: 50 g}",
      at: "out",
      times: every(0.25, count),
      reading: ["scale: free", "baseline: constant", ...(correlated ? [`correlated: ${correlated}`] : [])],
      noise: () => {
        const now = last;
        last = phi * last + Math.sqrt(1 - phi * phi) * draw.normal();
        return 0.005 * now;
      },
    },
  );
}

/** Solves A x = b by elimination with pivoting. */
function solve(a: number[][], b: number[]): number[] {
  const m = a.map((row, i) => [...row, b[i]]);
  for (let k = 0; k < m.length; k++) {
    const p = m.reduce((best, row, i) => (i >= k && Math.abs(row[k]) > Math.abs(m[best][k]) ? i : best), k);
    [m[k], m[p]] = [m[p], m[k]];
    for (let i = 0; i < m.length; i++) {
      if (i === k) continue;
      const f = m[i][k] / m[k][k];
      for (let j = k; j <= m.length; j++) m[i][j] -= f * m[k][j];
    }
  }
  return m.map((row, i) => row[m.length] / row[i]);
}

describe("errors that hang together by declaration", () => {
  const found = fitted(tank, [trial(1, "2 min")], { starts: 0 });
  const v = parameterOf(found, "held").value * 1e3;
  const at = every(0.25, 120);
  const e = at.map((m) => (50 / v) * Math.exp((-10 * m) / v));
  const scale = Object.values(found.nuisance)[0].scale?.value ?? NaN;
  const columns = [at.map((m, i) => (scale * e[i] * ((10 * m) / v - 1)) / v), e, at.map(() => 1)];
  const covariance = at.map((a) => at.map((b) => Math.exp(-Math.abs(a - b) / 2)));
  const weighted = columns.map((c) => solve(covariance, c));
  const between = columns.map((c) => weighted.map((w) => c.reduce((s, x, i) => s + x * w[i], 0)));

  test("end where the gradient of generalised least squares is nothing, worked with the whole matrix", () => {
    const residual = [...found.readings[0].residual];
    for (const [k, w] of weighted.entries()) {
      const gradient = w.reduce((s, x, i) => s + x * residual[i], 0);
      const size = Math.sqrt(between[k][k]) * Math.sqrt(found.residualSumOfSquares);
      expect(Math.abs(gradient / size)).toBeLessThan(1e-6);
    }
    const square = residual.reduce((s, x, i) => s + x * solve(covariance, residual)[i], 0);
    expect(square / found.residualSumOfSquares).toBeCloseTo(1, 8);
  });

  test("have the standard errors of that theory", () => {
    const first = solve(between, [1, 0, 0])[0];
    const variance = found.residualSumOfSquares / (120 - 3);
    const se = parameterOf(found, "held").standardError ?? NaN;
    expect((se * 1e3) / Math.sqrt(variance * first)).toBeCloseTo(1, 6);
  });

  test("are told apart by AICc from independent ones, whose likelihood is less", () => {
    const independent = fitted(tank, [trial(1, "no")], { starts: 0 });
    expect(found.aicc).toBeLessThan(independent.aicc - 50);
    expect(independent.findings.map((f) => f.code)).not.toContain("residuals-correlated");
    expect(parameterOf(independent, "held").standardErrorCorrelated).toBeUndefined();
  });
});

test("plain least squares knows what its values would be worth with errors that hang together", () => {
  const plain = fitted(tank, [trial(4, "", 400)], { starts: 0 });
  const generalised = fitted(tank, [trial(4, "fitted", 400)], { starts: 0 });
  // The same likelihood at values that are nearly its best.
  expect((plain.aiccCorrelated ?? NaN) - generalised.aicc).toBeGreaterThan(-1);
  expect((plain.aiccCorrelated ?? NaN) - generalised.aicc).toBeLessThan(3);
  expect(plain.aicc).toBeGreaterThan(generalised.aicc + 100);
  // The effective number of readings, about 400 (1 - r) / (1 + r).
  const finding = plain.findings.find((f) => f.code === "residuals-correlated");
  const effective = Number(finding?.evidence.effective);
  expect(effective).toBeGreaterThan(15);
  expect(effective).toBeLessThan(60);
  // Five unknowns: volume, scale, offset, variance, correlation time; against AICc's penalty for them.
  const penalty = 2 * 5 + (2 * 5 * 6) / (400 - 6);
  expect(plain.bic - (plain.aiccCorrelated ?? NaN)).toBeCloseTo(5 * Math.log(effective) - penalty, 6);
});

test("a fitted correlation time is near the truth, costs one unknown and makes the value better known", () => {
  const long = trial(4, "fitted", 400);
  const found = fitted(tank, [long], { starts: 0 });
  expect(found.converged).toBe(true);
  const time = (Object.values(found.nuisance)[0].correlation?.value ?? NaN) / 60;
  expect(time).toBeGreaterThan(1.2);
  expect(time).toBeLessThan(3.2);
  const declared = fitted(tank, [trial(4, `${time} min`, 400)], { starts: 0 });
  expect(parameterOf(found, "held").value / parameterOf(declared, "held").value).toBeCloseTo(1, 6);
  expect(found.aicc - declared.aicc).toBeGreaterThan(2);
  expect(found.aicc - declared.aicc).toBeLessThan(2.2);
});

test("values by generalised least squares scatter less than plain ones, over forty sets", () => {
  const spread = (correlated: string): number => {
    const off = Array.from({ length: 40 }, (_, k) => {
      const p = parameterOf(fitted(tank, [trial(100 + k, correlated)], { starts: 0 }), "held");
      return (p.value / 0.1 - 1) ** 2;
    });
    return Math.sqrt(off.reduce((s, x) => s + x, 0) / off.length);
  };
  expect(spread("2 min")).toBeLessThan(0.9 * spread("no"));
});

// Eleven times of a flask, two readings, two values fitted: noise alone must seldom look as if it hung together.
test("few readings of plain noise seldom seem to hang together, those of slow errors do", () => {
  const minutes = [0, 1, 2, 4, 6, 8, 10, 15, 20, 30, 40];
  const curve = (k1: number, k2: number): number[] => [
    ...minutes.map((t) => Math.exp(-k1 * t)),
    ...minutes.map((t) => (k1 / (k2 - k1)) * (Math.exp(-k1 * t) - Math.exp(-k2 * t))),
  ];
  const middle = curve(0.23, 0.06);
  const slopes = [curve(0.2301, 0.06), curve(0.23, 0.0601)].map((y) => Float64Array.from(y, (v, i) => v - middle[i]));
  const basis = orthonormalBasis(slopes);
  const blocks = [0, 11].map((from) => ({ time: Float64Array.from(minutes), from, declared: {} }) as unknown as Block);
  const draw = random(7);
  const alarms = (residual: () => Float64Array, sets: number): number => {
    let count = 0;
    for (let s = 0; s < sets; s++) {
      const r = residual();
      for (const q of basis) {
        const share = q.reduce((sum, x, i) => sum + x * r[i], 0);
        r.forEach((_, i) => {
          r[i] -= share * q[i];
        });
      }
      if (autocorrelationOf(blocks, r, { count: basis.length, columns: () => basis }).significant) count++;
    }
    return count;
  };
  expect(alarms(() => Float64Array.from({ length: 22 }, () => draw.normal()), 300)).toBeLessThanOrEqual(5);
  const slow = (): Float64Array =>
    Float64Array.from({ length: 22 }, (_, i) => Math.sin((2 * Math.PI * (i % 11)) / 11) + 0.1 * draw.normal());
  expect(alarms(slow, 20)).toBeGreaterThan(15);
});
