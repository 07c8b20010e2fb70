import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { conditionsOf } from "../../src/reaction/conditions.js";
import { conservedBy, imbalance } from "../../src/reaction/conserved.js";
import { steadyState } from "../../src/reaction/steady.js";
import { bracketed, gasConstant, one, read } from "./read.js";

/** Demo values: E/R = 8750 K, 50 kJ/mol, 4.1 kJ/(L K): 1 mol/L warms the liquid by 12.2 K. */
const chemistry = (extra = "") => `chemistry: made for a test
format: 1
species: {A: {}, B: {}, P: {}}
constants:
  k: {at: 350 K, value: 1 1/min, activation: 72.75 kJ/mol}
  back: {at: 350 K, value: 0.2 1/min, activation: 122.75 kJ/mol}
  k2: {at: 350 K, value: 0.3 L/mol/min, activation: 60 kJ/mol}
reactions:
  - {equation: A <-> P, rate: k * A - back * P, heat: -50 kJ/mol}
  - {equation: A + B -> 2 P, rate: k2 * A * B, heat: -20 kJ/mol}
medium: {heat-capacity: 4.1 kJ/L/K}
${extra}`;

const first = chemistry().replace("A <-> P, rate: k * A - back * P", "A -> P, rate: k * A");
const duty = (heat: string, feeds: string) =>
  `duty: made for a test\nformat: 1\nchemistry: c.yaml\nfeeds: ${feeds}\nheat: ${heat}\n`;

const run = (network: string, dutyText: string, chemistryText: string) => {
  const { plant, duty: d } = read(network, dutyText, chemistryText);
  return steadyState(plant, d.chemistry, d);
};

const k = (T: number): number => (1 / 60) * Math.exp((72750 / gasConstant) * (1 / 350 - 1 / T));
/** K by which the first reaction of 1 mol/L warms the liquid. */
const rise = 50e6 / 4.1e6;

describe("heat balances against closed forms", () => {
  const tank = one("{kind: stirred, volume: 100 L, to: product}");
  const feed = "{feed: {A: 2 mol/L, temperature: 340 K}}";

  test("an adiabatic stirred tank: T - T0 = rise * conversion, k(T) tau = X / (1 - X)", () => {
    const s = run(tank, duty("adiabatic", feed), first);
    const x = bracketed((X) => k(340 + 2 * rise * X) * 600 * (1 - X) - X, 0, 1);
    expect(s.converged).toBe(true);
    expect(Math.abs(s.outlets[0].concentrations[0] / 2000 - (1 - x))).toBeLessThan(1e-11);
    expect(Math.abs((s.outlets[0].temperature as number) - (340 + 2 * rise * x))).toBeLessThan(1e-9);
    expect(s.heat?.released).toBeCloseTo((10 / 60) * 2 * x * 50e3, 4);
    expect(Math.abs(s.heat?.closure as number)).toBeLessThan(1e-11);
  });

  test("a jacketed stirred tank", () => {
    const s = run(tank, duty("{body: {jacket: 290 K, conductance: 300 W/K}}", feed), first);
    const capacity = (10e-3 / 60) * 4.1e6;
    // Heat: capacity (T - T0) + UA (T - Tj) = flow dH c0 X(T).
    const X = (T: number): number => (k(T) * 600) / (1 + k(T) * 600);
    const T = bracketed((t) => capacity * (t - 340) + 300 * (t - 290) - (10e-3 / 60) * 2000 * 50e3 * X(t), 250, 450);
    expect(Math.abs((s.outlets[0].temperature as number) - T)).toBeLessThan(1e-9);
    expect(s.heat?.walls[0].gained).toBeCloseTo(300 * (290 - T), 6);
    expect(Math.abs(s.heat?.closure as number)).toBeLessThan(1e-11);
  });

  test("an adiabatic tube: space time is the integral of dX / (k(T(X)) (1 - X))", () => {
    const s = run(one("{kind: tubular, volume: 15 L, to: product}"), duty("adiabatic", feed), first);
    const x = 1 - s.outlets[0].concentrations[0] / 2000;
    // Simpson's rule in X, fine enough for 1e-12.
    const n = 4000;
    const f = (X: number): number => 1 / (k(340 + 2 * rise * X) * (1 - X));
    let sum = f(0) + f(x);
    for (let i = 1; i < n; i++) sum += (i % 2 ? 4 : 2) * f((x * i) / n);
    expect(Math.abs((sum * x) / (3 * n) / 90 - 1)).toBeLessThan(1e-9);
    expect(Math.abs((s.outlets[0].temperature as number) - (340 + 2 * rise * x))).toBeLessThan(1e-9);
  });

  test("a jacketed tube without reaction: T falls to the jacket as exp(-UA / (Q C))", () => {
    const clean = "{feed: {temperature: 340 K}}";
    const jacket = duty("{body: {jacket: 290 K, conductance: 300 W/K}}", clean);
    const expected = 290 + 50 * Math.exp(-300 / ((10e-3 / 60) * 4.1e6));
    for (const body of ["tubular", "laminar", "cascade", "dispersed"]) {
      const extra = { cascade: ", tanks: 3", dispersed: ", peclet: 8" }[body] ?? "";
      const s = run(one(`{kind: ${body}, volume: 100 L${extra}, to: product}`), jacket, first);
      if (body === "tubular") expect(s.outlets[0].temperature).toBeCloseTo(expected, 9);
      else expect(s.outlets[0].temperature).toBeGreaterThan(290);
      expect(s.heat?.walls[0].gained).toBeCloseTo(
        (10e-3 / 60) * 4.1e6 * ((s.outlets[0].temperature as number) - 340),
        4,
      );
      expect(Math.abs(s.heat?.released as number)).toBeLessThan(1e-4);
    }
  });

  test("a jacketed dispersed body without reaction: Danckwerts's solution for first-order decay of T - Tj", () => {
    const jacket = duty("{body: {jacket: 290 K, conductance: 300 W/K}}", "{feed: {temperature: 340 K}}");
    const s = run(one("{kind: dispersed, volume: 100 L, peclet: 8, to: product}"), jacket, first);
    const [pe, da] = [8, 300 / ((10e-3 / 60) * 4.1e6)];
    const a = Math.sqrt(1 + (4 * da) / pe);
    const left =
      (4 * a * Math.exp(pe / 2)) / ((1 + a) ** 2 * Math.exp((a * pe) / 2) - (1 - a) ** 2 * Math.exp((-a * pe) / 2));
    expect(Math.abs((s.outlets[0].temperature as number) - (290 + 50 * left))).toBeLessThan(1e-7);
  });

  test("without heat of reaction and jackets all feeds at one temperature are an isothermal duty", () => {
    const none = chemistry().replaceAll(/heat: -?\d+ kJ\/mol/g, "heat: 0 kJ/mol");
    const network = one("{kind: stirred, volume: 100 L, repeat: 3, backflow: 30 %, to: product}");
    const hot = run(network, duty("adiabatic", "{feed: {A: 2 mol/L, B: 1 mol/L, temperature: 355 K}}"), none);
    const { plant, duty: d } = read(
      network,
      "duty: x\nformat: 1\nchemistry: c.yaml\ntemperature: 355 K\nfeeds: {feed: {A: 2 mol/L, B: 1 mol/L}}\n",
      none,
    );
    const held = steadyState(plant, d.chemistry, d);
    for (let i = 0; i < 3; i++) {
      expect(hot.outlets[0].concentrations[i]).toBeCloseTo(held.outlets[0].concentrations[i], 8);
    }
    expect(hot.outlets[0].temperature).toBeCloseTo(355, 10);
  });

  test("streams mix their temperatures by flow", () => {
    const network = `network: two feeds
format: 1
feeds: {hot: {flow: 3 L/min, to: body}, cold: {flow: 7 L/min, to: body}}
compartments: {body: {kind: junction, to: product}}
outlets: [product]
`;
    const s = run(network, duty("adiabatic", "{hot: {temperature: 80 degC}, cold: {temperature: 10 degC}}"), first);
    expect(s.outlets[0].temperature).toBeCloseTo(273.15 + 31, 10);
  });
});

describe("derivatives", () => {
  test("of production with respect to the temperature are those of the law, constants included", () => {
    const { plant, duty: d } = read(
      one("{kind: stirred, volume: 100 L, to: product}"),
      duty("{body: {jacket: 290 K, conductance: 300 W/K}}", "{feed: {A: 2 mol/L, B: 1 mol/L, temperature: 355 K}}"),
      chemistry().replace("rate: k2 * A * B", "rate: k2 * A * B * (T / (300 K))^0.5"),
    );
    const { cell } = conditionsOf(plant, d.chemistry, d).reactionsAt(plant.exit.get("body") as number);
    const y = Float64Array.of(0.4, 0.7, 0.2, 0.98);
    const slope = new Float64Array(16);
    cell.jacobian(y, 0, slope, 0);
    const made = (at: Float64Array): Float64Array => {
      const out = new Float64Array(4);
      cell.production(at, 0, out, 0);
      return out;
    };
    for (let j = 0; j < 4; j++) {
      const h = 1e-4;
      const by = (shift: number): Float64Array => made(y.map((v, i) => (i === j ? v + shift : v)));
      const [p, m, pp, mm] = [by(h), by(-h), by(2 * h), by(-2 * h)];
      for (let i = 0; i < 4; i++) {
        const central = (8 * (p[i] - m[i]) - (pp[i] - mm[i])) / (12 * h);
        expect(Math.abs(slope[i * 4 + j] - central)).toBeLessThan(1e-8 * (1 + Math.abs(central)));
      }
    }
  });
});

describe("random networks", () => {
  const bodies = [
    "{kind: stirred, volume: 60 L, to: NEXT}",
    "{kind: stirred, volume: 40 L, repeat: 3, backflow: 50 %, to: NEXT}",
    "{kind: tubular, volume: 30 L, to: NEXT}",
    "{kind: dispersed, volume: 30 L, peclet: 6, to: NEXT}",
    "{kind: cascade, volume: 30 L, tanks: 2.5, to: NEXT}",
    "{kind: laminar, volume: 20 L, to: NEXT}",
    "{kind: tubular, volume: 20 L, stagnant: {volume: 10 L, exchange: 3 L/min}, to: NEXT}",
  ];
  const drawn = fc.record({
    row: fc.array(fc.nat(bodies.length - 1), { minLength: 1, maxLength: 3 }),
    back: fc.double({ min: 0, max: 0.7, noNaN: true }),
    bypass: fc.double({ min: 0, max: 0.5, noNaN: true }),
    heats: fc.tuple(fc.integer({ min: -30, max: 40 }), fc.integer({ min: -30, max: 40 })),
    feed: fc.integer({ min: 300, max: 360 }),
    jacket: fc.option(fc.integer({ min: 280, max: 370 })),
  });

  test("mass and energy close to 1e-9, whatever reacts", () => {
    fc.assert(
      fc.property(drawn, ({ row, back, bypass, heats, feed, jacket }) => {
        const named = row.map((kind, i) => {
          const last = i === row.length - 1;
          const onward = `{${last ? "mix" : `b${i + 1}`}: rest, b0: ${back / 2}}`;
          return `  b${i}: ${bodies[kind].replace("NEXT", back > 0 ? onward : last ? "mix" : `b${i + 1}`)}`;
        });
        const network = `network: drawn
format: 1
feeds: {feed: {flow: 10 L/min, to: {b0: rest, mix: ${bypass}}}, side: {flow: 2 L/min, to: b0}}
compartments:
${named.join("\n")}
  mix: {kind: stirred, volume: 10 L, to: product}
outlets: [product]
`;
        const text = chemistry()
          .replace("-50 kJ/mol", `${heats[0]} kJ/mol`)
          .replace("-20 kJ/mol", `${heats[1]} kJ/mol`);
        const heat = jacket === null ? "adiabatic" : `{b0: {jacket: ${jacket} K, conductance: 200 W/K}}`;
        const feeds = `{feed: {A: 1 mol/L, temperature: ${feed} K}, side: {B: 3 mol/L, temperature: 320 K}}`;
        const { plant, duty: d } = read(network, duty(heat, feeds), text);
        const s = steadyState(plant, d.chemistry, d);
        expect(s.converged).toBe(true);
        for (const c of s.closure) expect(Math.abs(c)).toBeLessThan(1e-9);
        expect(s.conserved).toBeLessThan(1e-9);
        expect(Math.abs(s.heat?.closure as number)).toBeLessThan(1e-9);
        if (jacket !== null) return;
        // Hess: without walls the heat is one of the sums that no reaction changes, whatever bodies it passed.
        const { scale, numbers } = conditionsOf(plant, d.chemistry, d);
        const warmth = (ports: typeof s.feeds): Float64Array =>
          scale.map((unit, i) =>
            ports.reduce(
              (sum, p) => sum + (p.flow * (p.concentrations[i] ?? (p.temperature as number) - 273)) / unit,
              0,
            ),
          );
        expect(imbalance(conservedBy(numbers, 4, 3), warmth(s.feeds), warmth(s.outlets))).toBeLessThan(1e-9);
      }),
      { numRuns: 4, seed: 11 },
    );
  });
});
