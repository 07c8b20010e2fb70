import { describe, expect, test } from "vitest";
import { steadyStates } from "../../src/reaction/states.js";
import { gasConstant, one, read, rootsOf } from "./read.js";

const duty = (heat: string, feeds: string) =>
  `duty: made for a test\nformat: 1\nchemistry: c.yaml\nfeeds: ${feeds}\n${heat}\n`;

const find = (network: string, dutyText: string, chemistry: string) => {
  const { plant, duty: d } = read(network, dutyText, chemistry);
  return steadyStates(plant, d.chemistry, d);
};

/**
 * The dimensionless first-order exothermic tank of A. Uppal, W.H. Ray, A.B. Poore, Chem. Eng. Sci. 29 (1974) 967-985 (from
 * memory), as a vessel: Da = k(T0) tau, B = gamma * (rise of full conversion) / T0, gamma = E / (R T0), beta = UA / (Q C).
 */
function uppal(Da: number, B: number, gamma: number, beta = 0, coolant = 0): ReturnType<typeof find> {
  const T0 = 300;
  const chemistry = `chemistry: first order
format: 1
species: {A: {}, P: {}}
constants: {k: {at: ${T0} K, value: ${Da / 600} 1/s, activation: ${gamma * gasConstant * T0} J/mol}}
reactions:
  - {equation: A -> P, rate: k * A, heat: ${-((B * T0) / gamma) * 4} kJ/mol}
medium: {heat-capacity: 4 kJ/L/K}
`;
  const wall = (10e-3 / 60) * 4e6 * beta;
  const jacket = T0 * (1 + coolant / gamma);
  const heat = beta > 0 ? `heat: {body: {jacket: ${jacket} K, conductance: ${wall} W/K}}` : "heat: adiabatic";
  return find(
    one("{kind: stirred, volume: 100 L, to: product}"),
    duty(heat, `{feed: {A: 1 mol/L, temperature: ${T0} K}}`),
    chemistry,
  );
}

describe("several steady states of one exothermic tank", () => {
  test.each([
    [0.03, 10, 20],
    [0.04, 8, 20],
    [0.02, 12, 40],
  ])("adiabatic, Da %s, B %s, gamma %s: all roots of the scalar balance, the middle one unstable", (Da, B, gamma) => {
    const missing = (x: number): number => Da * (1 - x) * Math.exp((B * x) / (1 + (B * x) / gamma)) - x;
    const roots = rootsOf(missing, 0, 1, 20_000);
    const { states, left } = uppal(Da, B, gamma);
    expect(left).toEqual([]);
    expect(roots.length).toBe(3);
    expect(states.length).toBe(3);
    states.forEach(({ state }, k) => {
      expect(Math.abs(1 - state.outlets[0].concentrations[0] / 1000 - roots[k])).toBeLessThan(1e-10);
      expect(Math.abs((state.outlets[0].temperature as number) - 300 * (1 + (B * roots[k]) / gamma))).toBeLessThan(
        1e-7,
      );
    });
    expect(states.map((s) => s.stable)).toEqual([true, false, true]);
    expect(states.map((s) => s.reached)).toEqual([true, false, false]);
  });

  test("one state on either side of the range of several, whose ends have a closed form", () => {
    // d ln Da / dx = 0 at 1 / (x (1 - x)) = B / (1 + B x / gamma)^2.
    const [B, gamma] = [10, 20];
    const fold = (x: number): number => (1 + (B * x) / gamma) ** 2 - B * x * (1 - x);
    const DaAt = (x: number): number => (x / (1 - x)) * Math.exp((-B * x) / (1 + (B * x) / gamma));
    const [ignition, extinction] = rootsOf(fold, 0.001, 0.999, 1000).map(DaAt);
    expect(ignition).toBeGreaterThan(extinction);
    for (const [Da, count] of [
      [ignition * 1.001, 1],
      [ignition * 0.999, 3],
      [extinction * 1.001, 3],
      [extinction * 0.999, 1],
    ]) {
      const { states } = uppal(Da, B, gamma);
      expect(states.length).toBe(count);
      if (count === 1) expect(states[0].stable).toBe(true);
    }
  });

  test("cooled: growth and swing of each state are the eigenvalues of the two balances", () => {
    for (const [Da, B, gamma, beta] of [
      [0.32, 11, 1e4, 1.5],
      [0.12, 14, 40, 2],
      [0.2, 11, 100, 1.5],
    ]) {
      const { states } = uppal(Da, B, gamma, beta);
      expect(states.length).toBeGreaterThan(0);
      for (const { state, mode, stable } of states) {
        const x = 1 - state.outlets[0].concentrations[0] / 1000;
        const y = (gamma * ((state.outlets[0].temperature as number) - 300)) / 300;
        const rate = Da * Math.exp(y / (1 + y / gamma));
        const lean = 1 / (1 + y / gamma) ** 2;
        const [a, b, c, d] = [-1 - rate, rate * (1 - x) * lean, -B * rate, B * rate * (1 - x) * lean - 1 - beta];
        const [half, under] = [(a + d) / 2, ((a - d) / 2) ** 2 + b * c];
        // The third mode is that of A and P together, which only washes out.
        const growth = Math.max(half + (under > 0 ? Math.sqrt(under) : 0), -1);
        expect(Math.abs((mode?.growth as number) * 600 - growth)).toBeLessThan(1e-6 * (1 + Math.abs(growth)));
        expect(Math.abs((mode?.swing as number) * 600 - (under < 0 && half > -1 ? Math.sqrt(-under) : 0))).toBeLessThan(
          1e-5,
        );
        expect(stable).toBe(growth < 0);
      }
    }
  });

  test("the jacketed tank that text books control: 0.877 mol/L at 324.5 K, 0.5 at 350 K, and a hot one", () => {
    // M.A. Henson, D.E. Seborg (eds), Nonlinear Process Control (1997), ch. 1 (from memory): q = 100 L/min, V = 100 L,
    // 1 mol/L at 350 K, E/R = 8750 K, k0 = 7.2e10 1/min, 50 kJ/mol, 239 J/(L K), UA = 5e4 J/(min K), coolant 300 K.
    const chemistry = `chemistry: A to B
format: 1
species: {A: {}, B: {}}
constants: {E: ${8750 * gasConstant} J/mol, k0: 7.2e10 1/min}
reactions:
  - {equation: A -> B, rate: k0 * exp(-E / (gas-constant * T)) * A, heat: -50 kJ/mol}
medium: {heat-capacity: 239 J/L/K}
`;
    const { states } = find(
      one("{kind: stirred, volume: 100 L, to: product}", "100 L/min"),
      duty(`heat: {body: {jacket: 300 K, conductance: ${5e4 / 60} W/K}}`, "{feed: {A: 1 mol/L, temperature: 350 K}}"),
      chemistry,
    );
    expect(states.length).toBe(3);
    expect(states[0].state.outlets[0].concentrations[0]).toBeCloseTo(877, 0);
    expect(states[0].state.outlets[0].temperature).toBeCloseTo(324.5, 1);
    expect(states[1].state.outlets[0].concentrations[0]).toBeCloseTo(500, 0);
    expect(states[1].state.outlets[0].temperature).toBeCloseTo(350, 1);
    expect(states.map((s) => s.stable)).toEqual([true, false, false]);
    expect(states[2].mode?.swing).toBeGreaterThan(0);
  });

  test("two reactions in a row: five states, stable and unstable in turn", () => {
    const chemistry = `chemistry: two steps
format: 1
species: {A: {}, B: {}, C: {}}
constants:
  k1: {at: 300 K, value: 0.002 1/min, activation: 90 kJ/mol}
  k2: {at: 300 K, value: 7e-10 1/min, activation: 180 kJ/mol}
reactions:
  - {equation: A -> B, rate: k1 * A, heat: -300 kJ/mol}
  - {equation: B -> C, rate: k2 * B, heat: -400 kJ/mol}
medium: {heat-capacity: 4 kJ/L/K}
`;
    const { states } = find(
      one("{kind: stirred, volume: 100 L, to: product}"),
      duty("heat: adiabatic", "{feed: {A: 1 mol/L, temperature: 300 K}}"),
      chemistry,
    );
    const law = (k: number, E: number, T: number): number => 10 * k * Math.exp((E / gasConstant) * (1 / 300 - 1 / T));
    const roots = rootsOf(
      (T) => {
        const [d1, d2] = [law(0.002, 90e3, T), law(7e-10, 180e3, T)];
        const a = 1 / (1 + d1);
        const b = (d1 * a) / (1 + d2);
        return 300 + 75 * (1 - a) + 100 * (1 - a - b) - T;
      },
      300,
      480,
      50_000,
    );
    expect(roots.length).toBe(5);
    expect(states.length).toBe(5);
    states.forEach(({ state }, k) => {
      expect(Math.abs((state.outlets[0].temperature as number) - roots[k])).toBeLessThan(1e-6);
    });
    expect(states.map((s) => s.stable)).toEqual([true, false, true, false, true]);
  });

  test("three adiabatic tanks in a row: each may ignite first, seven states, four of them stable", () => {
    const chemistry = `chemistry: first order
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 350 K, value: 1 1/min, activation: 72.75 kJ/mol}}
reactions:
  - {equation: A -> P, rate: k * A, heat: -50 kJ/mol}
medium: {heat-capacity: 0.239 kJ/L/K}
`;
    const { states } = find(
      one("{kind: stirred, volume: 100 L, repeat: 3, to: product}", "100 L/min"),
      duty("heat: adiabatic", "{feed: {A: 1 mol/L, temperature: 300 K}}"),
      chemistry,
    );
    expect(states.length).toBe(7);
    expect(states.filter((s) => s.stable).length).toBe(4);
    for (const { state } of states) {
      expect(Math.abs(state.heat?.closure as number)).toBeLessThan(1e-9);
      expect(Math.abs(state.closure[0])).toBeLessThan(1e-9);
    }
  });
});

describe("without heat", () => {
  test("Monod growth: washed out, or with cells at D = mu(S); the two exchange stability at the critical flow", () => {
    // D. Herbert, R. Elsworth, R.C. Telling, J. Gen. Microbiol. 14 (1956) 601-622.
    const chemistry = `chemistry: growth
format: 1
species: {X: {}, S: {}}
constants: {mu: 0.5 1/h, half: 0.2 g/L}
reactions:
  - {makes: {X: 0.5, S: -1}, rate: 2 * mu * S / (half + S) * X}
`;
    const at = (flow: number) =>
      find(
        one("{kind: stirred, volume: 100 L, to: product}", `${flow} L/h`),
        duty("", "{feed: {S: 10 g/L}}"),
        chemistry,
      );
    const below = at(30).states;
    const above = at(60).states;
    expect(below.length).toBe(2);
    const settled = 0.2 * (0.3 / (0.5 - 0.3));
    const grown = below.find((s) => s.state.outlets[0].concentrations[0] > 0.1);
    const washed = below.find((s) => s !== grown);
    expect(grown?.state.outlets[0].concentrations[1]).toBeCloseTo(settled, 9);
    expect(grown?.state.outlets[0].concentrations[0]).toBeCloseTo(0.5 * (10 - settled), 9);
    expect(grown?.stable).toBe(true);
    expect(washed?.stable).toBe(false);
    expect((washed?.mode?.growth as number) * 3600).toBeCloseTo((0.5 * 10) / 10.2 - 0.3, 9);
    expect(above.length).toBe(1);
    expect(above[0].stable).toBe(true);
  });

  test("a rate that its substrate holds back: three states, two stable", () => {
    const chemistry = `chemistry: inhibited
format: 1
species: {S: {}}
constants: {v: 2 mol/L/min, half: 0.1 mol/L, hinder: 0.1 mol/L}
reactions:
  - {makes: {S: -1}, rate: v * S / (half + S + S^2 / hinder)}
`;
    const { states } = find(
      one("{kind: stirred, volume: 33 L, to: product}"),
      duty("", "{feed: {S: 2 mol/L}}"),
      chemistry,
    );
    const roots = rootsOf((s) => 2 - s - (3.3 * 2 * s) / (0.1 + s + s * s * 10), 0, 2, 20_000);
    expect(roots.length).toBe(3);
    expect(states.length).toBe(3);
    states.forEach((s, k) => {
      expect(Math.abs(s.state.outlets[0].concentrations[0] / 1000 - roots[k])).toBeLessThan(1e-9);
    });
    expect(states.filter((s) => s.stable).length).toBe(2);
  });

  test("first order has one state, and is not searched", () => {
    const chemistry = `chemistry: decay
format: 1
species: {A: {}}
constants: {k: 1 1/min}
reactions:
  - {makes: {A: -1}, rate: k * A}
`;
    const found = find(one("{kind: stirred, volume: 100 L, to: product}"), duty("", "{feed: {A: 1 mol/L}}"), chemistry);
    expect(found).toEqual({ states: [], left: [] });
  });
});
