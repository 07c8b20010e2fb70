import { describe, expect, test } from "vitest";
import type { Fit } from "../../src/fit/result.js";
import type { Network } from "../../src/model/network.js";
import { studentTQuantile } from "../../src/numerics/distributions.js";
import { networkOf } from "./load.js";
import { every, fitted, noisy, synthetic } from "./synthetic.js";

const tank = (volume: string, flow = "10 L/min", extra = ""): Network =>
  networkOf(`network: One tank
format: 1
${extra}parameters:
  held: {value: ${volume}, between: [10 L, 500 L]}
feeds: {feed: {flow: ${flow}, to: bulk}}
compartments: {bulk: {kind: stirred, volume: held, to: out}}
outlets: [out]
`);

const pulse = (dose = "50 g"): string => `{at: feed, pulse: ${dose}}`;
const halfWidth = (f: Fit, j = 0): number => {
  const i = f.parameters[j].interval95;
  return i ? (i[1] - i[0]) / 2 : NaN;
};
const make = (
  network: Network,
  seed: number,
  more: { flows?: string; dose?: string; reading?: string[]; sd?: number } = {},
) =>
  synthetic(
    network,
    { held: 0.1 },
    {
      injection: pulse(more.dose),
      at: "out",
      times: every(0.5, 80),
      noise: noisy(seed, more.sd ?? 0.005),
      ...(more.flows ? { flows: more.flows } : {}),
      ...(more.reading ? { reading: more.reading } : {}),
    },
  );

describe("standard errors and intervals", () => {
  const plain = tank("150 L");
  const base = fitted(plain, [make(plain, 1)]);
  const t = studentTQuantile(0.975, 79);

  test("one tank: the linear theory of c = D/V exp(-Q t/V), worked by hand", () => {
    // d c / d V = c (Q t / V - 1) / V; SE^2 = s^2 / sum (dc/dV)^2, in L and g/L.
    const v = base.parameters[0].value * 1e3;
    const sum = every(0.5, 80).reduce((all, at) => {
      const c = (50 / v) * Math.exp((-10 * at) / v);
      return all + ((c * ((10 * at) / v - 1)) / v) ** 2;
    }, 0);
    const se = Math.sqrt(base.residualSumOfSquares / 79 / sum);
    expect((base.parameters[0].standardError ?? NaN) * 1e3).toBeCloseTo(se, 7);
    expect(halfWidth(base)).toBeCloseTo(t * (base.parameters[0].standardError ?? NaN), 10);
  });

  test("95 % intervals hold the truth about 95 times in 100", () => {
    const held = Array.from({ length: 40 }, (_, k) => {
      const interval = fitted(plain, [make(plain, 100 + k)], { starts: 0 }).parameters[0].interval95;
      return interval !== undefined && interval[0] <= 0.1 && 0.1 <= interval[1];
    });
    // Binomial(40, 0.95): 33 or fewer has probability 0.3 %.
    expect(held.filter(Boolean).length).toBeGreaterThan(33);
  });

  // Linear theory of V with one fact F held by a prior, worked by hand at the fitted values. Rows: dc/dV and dc/dF per standard
  // deviation of F at every point, then the prior (0, s). SE = s / |dc/dV|; the interval takes F as unknown.
  function byHand(found: Fit, fact: "dose" | "flow", sd: number): { se: number; half: number } {
    const v = found.parameters[0].value * 1e3;
    const e = found.held[0].deviations;
    const dose = 50 + (fact === "dose" ? sd * e : 0);
    const flow = 10 + (fact === "flow" ? sd * e : 0);
    let [a, b, c2] = [0, 0, 0];
    for (const at of every(0.5, 80)) {
      const c = (dose / v) * Math.exp((-flow * at) / v);
      const dv = (c * ((flow * at) / v - 1)) / v;
      const df = sd * (fact === "dose" ? c / dose : (-c * at) / v);
      a += dv * dv;
      b += dv * df;
      c2 += df * df;
    }
    const s2 = found.residualSumOfSquares / (79 - e * e);
    return { se: Math.sqrt(s2 / a) / 1e3, half: (t * Math.sqrt(s2 / (a - (b * b) / (c2 + s2)))) / 1e3 };
  }

  test("a dose with ± widens the interval, not the standard error", () => {
    const loose = fitted(plain, [make(plain, 1, { dose: "50 g ± 1 %" })]);
    expect(loose.held.map((h) => h.says)).toEqual(["dose of 'Synthetic'"]);
    const { se, half } = byHand(loose, "dose", 0.5);
    expect((loose.parameters[0].standardError ?? NaN) / se).toBeCloseTo(1, 5);
    expect(halfWidth(loose) / half).toBeCloseTo(1, 5);
    expect(half).toBeGreaterThan(1.1 * t * se);
    // A dose held by next to nothing is as good as a free scale.
    const free = fitted(plain, [make(plain, 1, { reading: ["scale: free"] })]);
    const unheld = fitted(plain, [make(plain, 1, { dose: "50 g ± 5000 %" })]);
    expect(Math.abs(unheld.parameters[0].value / free.parameters[0].value - 1)).toBeLessThan(1e-5);
    expect(Math.abs(halfWidth(unheld) / halfWidth(free) - 1)).toBeLessThan(0.02);
  });

  test("a flow of the day with ± widens it too, and a tiny ± does not", () => {
    const wide = fitted(plain, [make(plain, 1, { flows: "{feed: 10 L/min ± 3 %}" })]);
    const { se, half } = byHand(wide, "flow", 0.3);
    expect((wide.parameters[0].standardError ?? NaN) / se).toBeCloseTo(1, 5);
    expect(halfWidth(wide) / half).toBeCloseTo(1, 5);
    expect(half).toBeGreaterThan(t * se);
    const tiny = fitted(plain, [make(plain, 1, { flows: "{feed: 10 L/min ± 0.0001 %}" })]);
    expect(halfWidth(tiny) / halfWidth(base)).toBeCloseTo(1, 5);
  });

  test("a constant's ± is carried linearly", () => {
    const scaled = networkOf(`network: Share of a drawing's volume
format: 1
constants: {drawn: 200 L ± 2 %}
parameters: {share: {value: 60 %, between: [5 %, 100 %]}}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments:
  bulk:
    kind: stirred
    volume: share * drawn
    to: out
outlets: [out]
`);
    const found = fitted(scaled, [make(plain, 1)]);
    const p = found.parameters[0];
    const expected = t * Math.hypot(p.standardError ?? NaN, 0.02 * p.value);
    expect(halfWidth(found) / expected).toBeCloseTo(1, 6);
  });

  test("a parameter with ± is held by it where the data say little", () => {
    const prior = tank("130 L ± 2 L");
    const weak = fitted(prior, [make(plain, 3, { sd: 0.2 })]);
    expect(weak.parameters[0].value * 1e3).toBeGreaterThan(125);
    expect((weak.parameters[0].standardError ?? NaN) * 1e3).toBeLessThan(2.001);
    expect((weak.parameters[0].standardError ?? NaN) * 1e3).toBeGreaterThan(1.5);
    const strong = fitted(prior, [make(plain, 3, { sd: 1e-5 })]);
    expect(Math.abs(strong.parameters[0].value * 1e3 - 100)).toBeLessThan(0.1);
  });

  test("a noise floor alone changes no weight; a relative noise does", () => {
    const floor = fitted(plain, [make(plain, 1, { reading: ["noise: {floor: 0.02 g/L}"] })]);
    expect(floor.parameters[0].value).toBeCloseTo(base.parameters[0].value, 12);
    expect(floor.parameters[0].standardError).toBeCloseTo(base.parameters[0].standardError ?? NaN, 10);
    expect(floor.aicc).toBeCloseTo(base.aicc, 6);
    const next = noisy(9, 1);
    const relative = synthetic(
      plain,
      { held: 0.1 },
      {
        injection: pulse(),
        at: "out",
        times: every(0.5, 80),
        noise: (_, c) => 0.05 * c * next(),
        reading: ["noise: {relative: 5 %}"],
      },
    );
    const found = fitted(plain, [relative]);
    expect(found.converged).toBe(true);
    expect(found.residualUnit).toBeUndefined();
    // Weighted residuals are standard deviations: their mean square is about 1.
    expect(found.residualSumOfSquares / 79).toBeGreaterThan(0.7);
    expect(found.residualSumOfSquares / 79).toBeLessThan(1.4);
  });

  // Errors of one tank's volume by J+ V J+', worked with whole matrices: V from the correlation time that the fit found.
  test("residuals that hang together widen the interval as an autoregression makes them", () => {
    const next = noisy(5, 1);
    let last = 0;
    const trial = synthetic(
      plain,
      { held: 0.1 },
      {
        injection: pulse(),
        at: "out",
        times: every(0.25, 160),
        noise: () => {
          last = 0.8 * last + 0.003 * next();
          return last;
        },
      },
    );
    const found = fitted(plain, [trial]);
    const finding = found.findings.find((f) => f.code === "residuals-correlated");
    const time = Number(finding?.evidence.time) / 60;
    expect(Math.exp(-0.25 / time)).toBeGreaterThan(0.65);
    expect(Math.exp(-0.25 / time)).toBeLessThan(0.95);
    const p = found.parameters[0];
    const v = p.value * 1e3;
    const at = every(0.25, 160);
    const slope = at.map((m) => ((50 / v) * Math.exp((-10 * m) / v) * ((10 * m) / v - 1)) / v);
    const square = slope.reduce((sum, d) => sum + d * d, 0);
    let [between, squares] = [0, 0];
    for (let i = 0; i < 160; i++) {
      for (let j = 0; j < 160; j++) {
        const r = Math.exp(-Math.abs(at[i] - at[j]) / time);
        between += slope[i] * r * slope[j];
        squares += r * r;
      }
    }
    const variance = found.residualSumOfSquares / (160 - between / square);
    const wide = Math.sqrt(variance * between) / square / 1e3;
    expect((p.standardErrorCorrelated ?? NaN) / wide).toBeCloseTo(1, 6);
    expect(halfWidth(found) / (studentTQuantile(0.975, 160 ** 2 / squares - 1) * wide)).toBeCloseTo(1, 6);
    expect(wide).toBeGreaterThan(1.5 * (p.standardError ?? NaN));
  });
});
