import { describe, expect, test } from "vitest";
import { counterflow } from "../../src/reaction/exchangers.js";
import { steadyStates } from "../../src/reaction/states.js";
import { steadyState } from "../../src/reaction/steady.js";
import { gasConstant, one, read, rootsOf } from "./read.js";

const chemistry = `chemistry: first order
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 350 K, value: 0.5 1/min, activation: 80 kJ/mol}}
reactions:
  - {equation: A -> P, rate: k * A, heat: -80 kJ/mol}
medium: {heat-capacity: 4 kJ/L/K}
`;
/** K by which the reaction of all that is fed warms the liquid. */
const rise = 20;
const k = (T: number): number => (0.5 / 60) * Math.exp((80e3 / gasConstant) * (1 / 350 - 1 / T));
const duty = (exchange: string, T = 320) =>
  `duty: made for a test\nformat: 1\nchemistry: c.yaml\nheat: adiabatic\nheat-exchange: [${exchange}]\nfeeds: {feed: {A: 1 mol/L, temperature: ${T} K}}\nreport: [conversion of A]\n`;

describe("a feed that what leaves warms", () => {
  test.each([0.3, 0.7, 0.9])("an adiabatic tank, effectiveness %d: all roots of the scalar balance", (e) => {
    const { plant, duty: d } = read(
      one("{kind: stirred, volume: 100 L, to: product}"),
      duty(`{warms: feed, from: product, effectiveness: ${100 * e} %}`),
      chemistry,
    );
    // T = Tin + rise X, Tin = Tf + e (T - Tf): T = Tf + rise X / (1 - e).
    const roots = rootsOf(
      (T) => {
        const Da = k(T) * 600;
        return 320 + ((rise / (1 - e)) * Da) / (1 + Da) - T;
      },
      319,
      320 + rise / (1 - e) + 1,
      40_000,
    );
    const { states } = steadyStates(plant, d.chemistry, d);
    expect(states.length).toBe(roots.length);
    states.forEach(({ state, stable }, i) => {
      expect(Math.abs((state.temperatures?.[plant.exit.get("body") as number] as number) - roots[i])).toBeLessThan(
        1e-8,
      );
      // What leaves has given the feed what warmed it: all that reacts leaves with the product.
      const x = 1 - state.outlets[0].concentrations[0] / 1000;
      expect(Math.abs((state.outlets[0].temperature as number) - (320 + rise * x))).toBeLessThan(1e-8);
      expect(Math.abs(state.heat?.closure as number)).toBeLessThan(1e-10);
      const passed = (10e-3 / 60) * 4e6 * e * (roots[i] - 320);
      expect(state.heat?.exchanged[0].passed).toBeCloseTo(passed, 3);
      expect(stable).toBe(i % 2 === 0);
    });
  });

  test("an adiabatic tube: the feed enters at the temperature that its own product makes", () => {
    const { plant, duty: d } = read(
      one("{kind: tubular, volume: 40 L, to: product}"),
      duty("{warms: feed, from: product, conductance: 800 W/K}"),
      chemistry,
    );
    const e = counterflow(800 / ((10e-3 / 60) * 4e6), 1);
    const s = steadyState(plant, d.chemistry, d);
    expect(s.converged).toBe(true);
    const x = 1 - s.outlets[0].concentrations[0] / 1000;
    const inlet = s.temperatures?.[plant.exit.get("feed") as number] as number;
    const hot = s.temperatures?.[plant.exit.get("body") as number] as number;
    expect(Math.abs(inlet - (320 + e * (hot - 320)))).toBeLessThan(1e-8);
    expect(Math.abs(hot - (inlet + rise * x))).toBeLessThan(1e-8);
    // Space time by Simpson's rule over conversion.
    const n = 4000;
    const f = (X: number): number => 1 / (k(inlet + rise * X) * (1 - X));
    let sum = f(0) + f(x);
    for (let i = 1; i < n; i++) sum += (i % 2 ? 4 : 2) * f((x * i) / n);
    expect(Math.abs((sum * x) / (3 * n) / 240 - 1)).toBeLessThan(1e-9);
  });

  test("counterflow: equal flows, and one without end", () => {
    expect(counterflow(3, 1)).toBeCloseTo(0.75, 12);
    expect(counterflow(3, 0)).toBeCloseTo(1 - Math.exp(-3), 12);
    expect(counterflow(3, 1 - 1e-7)).toBeCloseTo(0.75, 6);
    expect(counterflow(0, 0.5)).toBe(0);
  });
});
