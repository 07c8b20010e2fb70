import { describe, expect, test } from "vitest";
import { delayedMode } from "../../src/reaction/characteristic.js";
import type { Disturbed } from "../../src/reaction/disturbed.js";
import { steadyStates } from "../../src/reaction/states.js";
import { read } from "./read.js";

/** x' = -b x(t - tau): a cell that keeps what it has, and a way that brings it back with a minus. */
const echo = (b: number, tau: number): Disturbed => ({
  count: 2,
  size: 1,
  memory: [1, 0],
  slopes: [Float64Array.of(1), undefined],
  responses: [
    undefined,
    {
      delay: tau,
      write(re, im, outRe, outIm) {
        outRe[0] = -b * Math.exp(-re * tau) * Math.cos(im * tau);
        outIm[0] = b * Math.exp(-re * tau) * Math.sin(im * tau);
      },
    },
  ],
  inlets: [[{ from: 1, share: 1 }], [{ from: 0, share: 1 }]],
});

/** s tau = W0(-b tau), by Newton's method on s + b exp(-s tau) = 0. */
function lambert(b: number, tau: number): { re: number; im: number } {
  let [x, y] = b * tau < 1 / Math.E ? [-b, 0] : [0, 1.5];
  [x, y] = [x * tau, y];
  for (let k = 0; k < 100; k++) {
    const e = Math.exp(-x) * b * tau;
    const [f, g] = [x + e * Math.cos(y), y - e * Math.sin(y)];
    const [p, q] = [1 - e * Math.cos(y), e * Math.sin(y)];
    const d = p * p + q * q;
    [x, y] = [x - (f * p + g * q) / d, y - (g * p - f * q) / d];
  }
  return { re: x / tau, im: Math.abs(y) / tau };
}

describe("stability with delays", () => {
  test("x' = -b x(t - tau) is stable up to b tau = pi/2, and swings from 1/e on (N.D. Hayes, J. London Math. Soc. 25 (1950) 226-232, from memory)", () => {
    for (const tau of [0.5]) {
      for (const z of [0.3, 0.6, 1.5, 1.62, 4]) {
        const { re, im } = lambert(z / tau, tau);
        const mode = delayedMode(echo(z / tau, tau), true);
        expect(Math.sign(mode?.growth ?? Number.NaN)).toBe(z < Math.PI / 2 ? -1 : 1);
        expect((mode?.growth ?? 0) * tau).toBeCloseTo(re * tau, 2);
        if (im === 0) expect(mode?.swing).toBe(0);
        else expect((mode?.swing ?? 0) / im).toBeCloseTo(1, 1);
        expect(Math.sign(delayedMode(echo(z / tau, tau), false)?.growth ?? 0)).toBe(Math.sign(re));
      }
    }
  });

  const chemistry = `chemistry: first order
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.001 1/min, activation: 80 kJ/mol}}
reactions: [{equation: A -> P, rate: k * A, heat: -200 kJ/mol}]
medium: {heat-capacity: 4 kJ/L/K}
`;
  const duty =
    "duty: x\nformat: 1\nchemistry: c.yaml\nheat: adiabatic\nfeeds: {feed: {A: 2 mol/L, temperature: 300 K}}\nreport: [conversion of A]\n";
  const recycle = (body: string) => `network: loop
format: 1
feeds: {feed: {flow: 1 L/min, to: body}}
compartments:
  body: {${body}, to: {body: 4 L/min, out: rest}}
outlets: [out]
`;

  test("an adiabatic tube with recycle: what goes round is multiplied by the share that comes back and by the slope of one pass", () => {
    const { plant, duty: hot } = read(recycle("kind: tubular, volume: 10 L"), duty, chemistry);
    const { states, left } = steadyStates(plant, hot.chemistry, hot);
    expect(left).toEqual([]);
    expect(states.map((s) => s.stable)).toEqual([true, false, true]);
    // Heat and amount go together: one pass takes an inlet conversion x to that at which the integral of dx / (k (1 - x)) is tau.
    const rate = (x: number): number =>
      (0.001 * (1 - x) * Math.exp((80_000 / 8.314462618) * (1 / 300 - 1 / (300 + 100 * x)))) / 60;
    const slope = ({ state }: (typeof states)[number]): number => {
      const out = state.outlets[0].concentrations[0] / 2000;
      return rate(1 - out) / rate(0.8 * (1 - out));
    };
    for (const s of states) {
      const again = Math.max(0.8 * slope(s), 0.8);
      expect(s.mode?.growth).toBeCloseTo(Math.log(again) / 120, 5);
    }
  });

  test.each([
    ["laminar flow", "kind: laminar, volume: 10 L", "kind: tubular, volume: 10 L"],
    [
      "a tube beside as many tanks as make one",
      "kind: tubular, volume: 10 L",
      "kind: stirred, volume: 10 L, repeat: 30",
    ],
  ])("%s: judged as what mixes nearly alike", (_, one, other) => {
    const stable = (body: string) => {
      const { plant, duty: hot } = read(recycle(body), duty, chemistry);
      return steadyStates(plant, hot.chemistry, hot).states.map((s) => s.stable);
    };
    expect(stable(one)).toEqual([true, false, true]);
    expect(stable(other)).toEqual([true, false, true]);
  });
});
