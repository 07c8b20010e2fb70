import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import type { Problem } from "../../src/problems/problem.js";
import { RefusedError } from "../../src/problems/refused.js";
import { networkSettings } from "../../src/reaction/conditions.js";
import { steadyState } from "../../src/reaction/steady.js";
import { transientFigures } from "../../src/transient/figures.js";
import { transient } from "../../src/transient/transient.js";

const chemistry = `chemistry: Warm decay
format: 1
species: {A: {}, P: {}}
constants: {k: {at: 300 K, value: 0.05 1/min, activation: 50 kJ/mol}}
reactions: [{equation: A -> P, rate: k * A, heat: -80 kJ/mol}]
medium: {heat-capacity: 4 kJ/L/K}
`;

/** @param log what a table that the duty names holds */
function read(network: string, duty: string, log = "") {
  const net = parseNetwork(`network: A vessel\nformat: 1\n${network}`, { path: "n.yaml" });
  const found = parseDuty(`duty: A duty\nformat: 1\nchemistry: c.yaml\n${duty}`, {
    path: "d.yaml",
    read: (path) => (path.endsWith(".csv") ? log : chemistry),
  });
  expect([...net.problems, ...found.problems]).toEqual([]);
  if (!net.document || !found.document) throw new Error("unread");
  const { plant } = compile(net.document, networkSettings(found.document));
  if (!plant) throw new Error("no plant");
  return { plant, duty: found.document };
}

const minutes = (...t: number[]): number[] => t.map((x) => 60 * x);
const train = `feeds: {feed: {flow: 10 L/min, to: pipe}}
compartments:
  pipe: {kind: tubular, volume: 50 L, to: tank}
  tank: {kind: stirred, volume: 400 L, to: {pipe: 5 L/min, bed: rest}}
  bed: {kind: dispersed, volume: 60 L, peclet: 15, to: product}
outlets: [product]
`;

describe("heat in time", () => {
  test("adiabatic batch: the temperature follows conversion, and the curve an independent quadrature", () => {
    const { plant, duty } = read(
      "compartments: {flask: {kind: stirred, volume: 1 L}}",
      "contents: {flask: {A: 1 mol/L, temperature: 300 K}}\nheat: adiabatic",
    );
    const run = transient(plant, duty.chemistry, duty, minutes(0, 2, 5, 10, 20));
    const [flask] = run.places;
    // Adiabatic rise 20 K; t = int dx / (k(T) (1 - x)), T = 300 + 20 x, by Simpson's rule.
    const k = (x: number): number => (0.05 / 60) * Math.exp((50_000 / 8.314462618) * (1 / 300 - 1 / (300 + 20 * x)));
    for (let j = 1; j < 5; j++) {
      const x = 1 - flask.values[2 * j] / 1000;
      expect(flask.temperatures?.[j]).toBeCloseTo(300 + 20 * x, 6);
      const n = 20_000;
      let sum = 0;
      for (let i = 0; i <= n; i++)
        sum += (i === 0 || i === n ? 1 : i % 2 ? 4 : 2) / (k((x * i) / n) * (1 - (x * i) / n));
      expect((sum * x) / (3 * n) / run.times[j]).toBeCloseTo(1, 8);
    }
    expect(Math.abs(run.balance?.heat ?? 1)).toBeLessThan(1e-9);
    expect(run.balance?.conserved).toBeLessThan(1e-12);
  });

  test.each([
    "heat: adiabatic",
    "heat: {tank: {jacket: 20 degC, conductance: 300 W/K}, pipe: {jacket: 30 degC, conductance: 20 W/K}}",
  ])("a loop of a tube and a tank, then a dispersed bed, comes to its steady state: %s", (heat) => {
    const { plant, duty } = read(train, `feeds: {feed: {A: 1 mol/L, temperature: 30 degC}}\n${heat}`);
    const run = transient(plant, duty.chemistry, duty, minutes(0, 20, 900), { at: ["tank", "pipe"] });
    const still = steadyState(plant, duty.chemistry, duty);
    const last = run.outlets[0].values.slice(4);
    for (let i = 0; i < 2; i++) expect(last[i] / 1000).toBeCloseTo(still.outlets[0].concentrations[i] / 1000, 8);
    expect(run.outlets[0].temperatures?.[2]).toBeCloseTo(still.outlets[0].temperature ?? 0, 6);
    for (const c of run.balance?.closure ?? [1]) expect(Math.abs(c)).toBeLessThan(1e-9);
    expect(Math.abs(run.balance?.heat ?? 1)).toBeLessThan(1e-9);
    expect(run.balance?.conserved).toBeLessThan(1e-9);
  });

  test("a time beyond a limit of the temperature: an adiabatic batch by the closed form of its temperature", () => {
    const { plant, duty } = read(
      "compartments: {flask: {kind: stirred, volume: 1 L}}",
      "contents: {flask: {A: 1 mol/L, temperature: 300 K}}\nheat: adiabatic\nreport: [time temperature at flask above 310 K, time temperature at flask below 299 K]",
    );
    const run = transient(plant, duty.chemistry, duty, minutes(0, 60));
    const [hot, cold] = transientFigures(plant, duty, run);
    // Half converted at 310 K: t = int dx / (k(T) (1 - x)) up to 1/2, by Simpson's rule.
    const k = (x: number): number => (0.05 / 60) * Math.exp((50_000 / 8.314462618) * (1 / 300 - 1 / (300 + 20 * x)));
    const n = 20_000;
    let sum = 0;
    for (let i = 0; i <= n; i++) sum += (i === 0 || i === n ? 1 : i % 2 ? 4 : 2) / (k(i / 2 / n) * (1 - i / 2 / n));
    expect((3600 - hot.value) / (sum / 2 / (3 * n))).toBeCloseTo(1, 7);
    expect(hot.beyond?.stillAtEnd).toBe(true);
    expect(hot.beyond?.amount).toBeUndefined();
    expect(cold.value).toBe(0);
  });

  test("where the temperature is held, it is beyond a limit all the time or never", () => {
    const { plant, duty } = read(
      "compartments: {flask: {kind: stirred, volume: 1 L}}",
      "contents: {flask: {A: 1 mol/L}}\ntemperature: 300 K\nreport: [time temperature at flask above 290 K, time temperature at flask above 310 K]",
    );
    const run = transient(plant, duty.chemistry, duty, minutes(0, 60));
    expect(transientFigures(plant, duty, run).map((f) => f.value)).toEqual([3600, 0]);
  });

  describe("a feed whose temperature changes in time, nothing reacts", () => {
    const jump = "{from: 300 K, to: 320 K, start: 5 min}";
    const vessel = (body: string) =>
      `feeds: {feed: {flow: 10 L/min, to: body}}\ncompartments: {body: ${body}}\noutlets: [product]\n`;
    const tank = vessel("{kind: stirred, volume: 100 L, to: product}");
    const tube = vessel("{kind: tubular, volume: 100 L, to: product}");
    const log = "minutes,T\n0,300\n10,330\n15,330\n25,310\n";
    const logged = "{file: log.csv, time: {column: minutes, unit: min}, value: {column: T, unit: K}}";
    const at = [0, 2, 5, 6, 9, 12, 15, 16, 20, 25, 30, 60];

    function follow(network: string, temperature: string) {
      const { plant, duty } = read(network, `feeds: {feed: {temperature: ${temperature}}}\nheat: adiabatic`, log);
      const run = transient(plant, duty.chemistry, duty, minutes(...at));
      expect(run.start).toBe("steady");
      expect(Math.abs(run.balance?.heat ?? 1)).toBeLessThan(1e-9);
      return Array.from(run.outlets[0].temperatures ?? []);
    }

    test("a tank after a jump: T = T1 + dT (1 - exp(-t/tau))", () => {
      const found = follow(tank, jump);
      at.forEach((t, k) => {
        expect(found[k]).toBeCloseTo(t < 5 ? 300 : 300 + 20 * (1 - Math.exp(-(t - 5) / 10)), 6);
      });
    });

    test("a tube: the jump comes a space time later, as a jump", () => {
      // At 15 min itself, what is after it.
      expect(follow(tube, jump)).toEqual(at.map((t) => expect.closeTo(t < 15 ? 300 : 320, 8)));
    });

    /** K by the log, straight between its rows. */
    const fed = (t: number): number => {
      if (t <= 10) return 300 + 3 * Math.max(t, 0);
      return t <= 15 ? 330 : 330 - 2 * (Math.min(t, 25) - 15);
    };

    test("a tube by a log: the log a space time later", () => {
      expect(follow(tube, logged)).toEqual(at.map((t) => expect.closeTo(fed(t - 10), 7)));
    });

    test("a tank by a log: of a ramp, what is fed less slope times tau, and what is off by exp(-t/tau)", () => {
      // Within a row of constant slope s: T = fed - s tau + (T0 - fed0 + s tau) exp(-(t - t0)/tau).
      const rows = [
        [0, 3],
        [10, 0],
        [15, -2],
        [25, 0],
      ];
      const step = (k: number, t: number, T0: number): number => {
        const [from, s] = rows[k];
        return fed(t) - 10 * s + (T0 - fed(from) + 10 * s) * Math.exp(-(t - from) / 10);
      };
      const expected = (t: number): number => {
        let T = 300;
        for (let k = 0; k < rows.length; k++) {
          const end = rows[k + 1]?.[0] ?? Number.POSITIVE_INFINITY;
          if (t <= end) return step(k, t, T);
          T = step(k, end, T);
        }
        return T;
      };
      const found = follow(tank, logged);
      at.forEach((t, k) => {
        expect(found[k]).toBeCloseTo(expected(t), 6);
      });
    });
  });

  test("an exchanger beside a flow that changes is refused with its place: what it passes hangs on the flow", () => {
    const { plant, duty } = read(
      train,
      `feeds: {feed: {A: 1 mol/L, temperature: 30 degC}}
heat: adiabatic
heat-exchange: [{warms: feed, from: product, effectiveness: 70 %}]
flows: {feed: {from: 10 L/min, to: 5 L/min}}`,
    );
    let problems: readonly Problem[] = [];
    try {
      transient(plant, duty.chemistry, duty, minutes(0, 20));
    } catch (e) {
      if (e instanceof RefusedError) problems = e.problems;
    }
    expect(problems.map((p) => p.code)).toEqual(["not-yet"]);
    expect(problems[0].message).toContain("`heat-exchange` (of 'feed')");
  });
});
