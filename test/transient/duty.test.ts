import { describe, expect, test } from "vitest";
import { checkDuty } from "../../src/check/duty.js";
import { transientText } from "../../src/cli/text/transient.js";
import { clockFrom } from "../../src/cli/times.js";
import { compile } from "../../src/compile/compile.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { collector } from "../../src/problems/report.js";
import { networkSettings } from "../../src/reaction/conditions.js";
import { figuresOf } from "../../src/reaction/figures.js";
import { steadyState } from "../../src/reaction/steady.js";
import { transientFigures } from "../../src/transient/figures.js";
import { endOf, withTimes } from "../../src/transient/in-time.js";
import { passageOf } from "../../src/transient/passage.js";
import { transient } from "../../src/transient/transient.js";

const chemistry = `chemistry: Decay
format: 1
species: {A: {molar-mass: 50 g/mol}, P: {}}
constants: {k: 0.02 1/min}
reactions: [{equation: A -> P, rate: k * A}]
`;
const tank = `network: A tank
format: 1
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: 500 L, to: product}}
outlets: [product]
`;
const log = "t,A\n0,1\n10,2\n20,2\n30,1\n";

function read(network: string, duty: string) {
  const files = (path: string): string | undefined =>
    path.endsWith("chemistry.yaml") ? chemistry : path.endsWith(".csv") ? log : undefined;
  const options = { read: files };
  const net = parseNetwork(network, { path: "n.yaml", ...options });
  const found = parseDuty(`duty: A duty\nformat: 1\nchemistry: chemistry.yaml\n${duty}`, {
    path: "d.yaml",
    ...options,
  });
  expect(net.problems).toEqual([]);
  expect(found.problems).toEqual([]);
  const [document, spoken] = [net.document, found.document];
  if (!document || !spoken) throw new Error("unread");
  const { report, problems } = collector();
  checkDuty(document, spoken, report, true);
  const { plant } = compile(document, networkSettings(spoken));
  if (!plant) throw new Error("no plant");
  return { plant, duty: spoken, codes: problems.map((p) => p.code) };
}

const minutes = (...t: number[]): number[] => t.map((x) => 60 * x);

describe("a duty in time", () => {
  test("an upset for good is a change of grade: from one steady state to the other, and the time over a limit in closed form", () => {
    const { plant, duty, codes } = read(
      tank,
      "feeds: {feed: {A: {from: 1 mol/L, to: 2 mol/L, start: 5 min}}}\nreport: [time A at product above 0.75 mol/L, conversion of A]",
    );
    expect(codes).toEqual([]);
    const run = transient(plant, duty.chemistry, duty, minutes(0, 5, 600), { at: [] });
    const [a] = [run.outlets[0].values];
    expect(a[0]).toBeCloseTo(500, 6);
    expect(a[2]).toBeCloseTo(500, 6);
    expect(a[4]).toBeCloseTo(1000 * (1 - Math.exp(-0.04 * 595)) + 500 * Math.exp(-0.04 * 595), 5);
    const [over, conversion] = transientFigures(plant, duty, run);
    // 0.5 (1 - exp(-0.04 t)) = 0.25 mol/L
    const crossed = 5 + Math.log(2) / 0.04;
    expect(over.value / 60).toBeCloseTo(600 - crossed, 6);
    expect((over as { beyond?: { volume: number } }).beyond?.volume).toBeCloseTo((600 - crossed) / 100, 8);
    expect(conversion.value).toBeCloseTo(0.5, 8);
    const passage = passageOf(run.look("product"), 2, 0, 36_000);
    expect((passage.t99 ?? 0) / 60).toBeCloseTo(5 + Math.log(100) / 0.04, 4);
  });

  test("what is still beyond its limit at the end is told as such, and has no end where the duty is over", () => {
    const steps = (lasting: string) =>
      read(
        tank,
        `feeds: {feed: {A: {from: 1 mol/L, to: 2 mol/L, start: 5 min${lasting}}}}\nreport: [time A at product above 0.75 mol/L, A at product]`,
      );
    for (const [lasting, still] of [
      ["", true],
      [", lasting: 40 min", false],
    ] as const) {
      const { plant, duty } = steps(lasting);
      const run = transient(plant, duty.chemistry, duty, minutes(0, 600), { at: [] });
      const figures = transientFigures(plant, duty, run);
      expect(figures[0].beyond?.stillAtEnd).toBe(still);
      const state = steadyState(plant, duty.chemistry, duty);
      const [over, level] = withTimes(plant, duty, figuresOf(plant, duty, state));
      expect(over.why).toBe(still ? "infinite" : undefined);
      expect(Number.isFinite(over.value)).toBe(!still);
      expect(level.value).toBeCloseTo(500, 6);
    }
  });

  test("a start-up through a tube alone is followed beyond the front", () => {
    const { plant, duty } = read(tank.replace("stirred", "tubular"), "feeds: {feed: {A: 1 mol/L}}");
    expect(endOf(plant, duty) / 60).toBeCloseTo(150, 6);
    const mixed = read(tank, "feeds: {feed: {A: 1 mol/L}}");
    expect(endOf(mixed.plant, mixed.duty) / 60).toBeGreaterThan(50 * Math.log(1000));
  });

  test("before anything that is fed has come through, there is no conversion", () => {
    const { plant, duty } = read(
      tank.replace("stirred", "tubular"),
      "feeds: {feed: {A: 1 mol/L}}\nreport: [conversion of A, A at product]",
    );
    for (const [until, why] of [
      [40, "undefined"],
      [60, undefined],
    ] as const) {
      const figures = transientFigures(plant, duty, transient(plant, duty.chemistry, duty, minutes(0, until)));
      expect(figures.map((f) => f.why)).toEqual([why, undefined]);
      if (!why) expect(figures[0].value).toBeCloseTo(1 - Math.exp(-1), 8);
    }
  });

  test("balances that do not close are told", () => {
    const { plant, duty } = read(tank, "feeds: {feed: {A: 1 mol/L}}");
    const run = transient(plant, duty.chemistry, duty, minutes(0, 60));
    const { balance } = run;
    if (!balance) throw new Error("no balance");
    const clock = clockFrom({ until: "60 min" }, plant.network.units.time, () => 3600);
    expect(transientText(plant, duty, run, [], clock, [])).not.toContain("warning");
    const off = { ...run, balance: { ...balance, conserved: 5e-4, off: 5e-4 } };
    expect(transientText(plant, duty, off, [], clock, [])).toContain("The balances of this run are off by 0.0005");
  });

  test("grams by the molar mass, in feeds, limits and what is there at the start", () => {
    const molar = read(
      tank,
      "feeds: {feed: {A: {from: 1 mol/L, to: 2 mol/L, start: 5 min}}}\nreport: [time A at product above 0.75 mol/L]",
    );
    const mass = read(
      tank,
      "feeds: {feed: {A: {from: 50 g/L, to: 100 g/L, start: 5 min}, P: 0 mol/L}}\nreport: [time A at product above 37.5 g/L]",
    );
    const [one, other] = [molar, mass].map(({ plant, duty }) => {
      const run = transient(plant, duty.chemistry, duty, minutes(0, 40, 80), { at: [] });
      return [transientFigures(plant, duty, run)[0].value, run.outlets[0].values[2]];
    });
    expect(other[0]).toBeCloseTo(one[0], 6);
    expect(other[1]).toBeCloseTo(one[1], 9);
    const held = read(tank, "feeds: {feed: {}}\ncontents: {tank: {A: 50 g/L}}");
    const run = transient(held.plant, held.duty.chemistry, held.duty, minutes(0, 25), { at: [] });
    expect(run.outlets[0].values[2]).toBeCloseTo(50 * Math.exp(-1), 7);
  });

  test("a logged feed: straight between rows, starting in balance with the first", () => {
    const { plant, duty } = read(
      tank,
      "feeds: {feed: {A: {file: a.csv, time: {column: t, unit: min}, value: {column: A, unit: mol/L}}}}",
    );
    const run = transient(plant, duty.chemistry, duty, minutes(0, 10, 20, 30, 200), { at: [] });
    expect(run.start).toBe("steady");
    // c' = 0.02 f - 0.04 c in minutes; f = 1 + t/10 up to 10: c = 0.05 t - 0.75 + 1.25 exp(-0.04 t), and so on.
    const ramp = (c: number, f: number, slope: number, t: number): number => {
      const particular = (u: number): number => 0.5 * f + 0.5 * slope * u - 12.5 * slope;
      return particular(t) + (c - particular(0)) * Math.exp(-0.04 * t);
    };
    const at10 = ramp(0.5, 1, 0.1, 10);
    const at20 = ramp(at10, 2, 0, 10);
    const at30 = ramp(at20, 2, -0.1, 10);
    [0.5, at10, at20, at30, ramp(at30, 1, 0, 170)].forEach((c, k) => {
      expect(run.outlets[0].values[2 * k] / 1000).toBeCloseTo(c, 9);
    });
  });

  test("a flow that surges and comes back: how far a kill and a conversion went meanwhile, by closed form", () => {
    const { plant, duty } = read(
      tank,
      "feeds: {feed: {A: 1 mol/L}}\nflows: {feed: {from: 10 L/min, to: 30 L/min, start: 5 min, lasting: 20 min}}\nreport: [log-removal of A, conversion of A]",
    );
    const times = minutes(...Array.from({ length: 121 }, (_, k) => 5 * k));
    const run = transient(plant, duty.chemistry, duty, times, { at: [] });
    const [kill, conversion] = transientFigures(plant, duty, run);
    // c' = D (1 - c) - 0.02 c in minutes; D = 0.02, from 5 to 25 min 0.06: highest at 25 min, where the surge ends.
    const peak = 0.75 - 0.25 * Math.exp(-0.08 * 20);
    expect(kill.value).toBeCloseTo(Math.log10(2), 6);
    expect(kill.range?.lowest.value).toBeCloseTo(-Math.log10(peak), 8);
    expect(kill.range?.lowest.at).toBe(25 * 60);
    expect(kill.range?.highest.value).toBeCloseTo(Math.log10(2), 8);
    expect(conversion.range?.lowest.value).toBeCloseTo(1 - peak, 8);
    const text = transientText(
      plant,
      duty,
      run,
      [kill, conversion],
      clockFrom({ until: "600 min" }, plant.network.units.time, () => 36_000),
      [],
    );
    expect(text).toMatch(/log-removal of A +0\.301 +lowest 0\.1552 at 25 min, highest 0\.301 at 0 min/);
  });

  test("a closed vessel says what is in it", () => {
    const flask = "network: A flask\nformat: 1\ncompartments: {flask: {kind: stirred, volume: 1 L}}\n";
    expect(read(flask, "temperature: 25 degC").codes).toEqual(["contents-missing"]);
    const { plant, duty, codes } = read(
      flask,
      "contents: {all: {A: 2 mol/L}}\nreport: [conversion of A, conversion of A at flask]",
    );
    expect(codes).toEqual([]);
    const run = transient(plant, duty.chemistry, duty, minutes(0, 50));
    for (const { value } of transientFigures(plant, duty, run)) expect(value).toBeCloseTo(1 - Math.exp(-1), 9);
  });

  test("names of places are looked up", () => {
    expect(read(tank, "feeds: {feed: {}}\ncontents: {tnak: {A: 1 mol/L}}").codes).toEqual(["unknown-place"]);
    expect(read(tank, "feeds: {feed: {}}\nreport: [time A at prodct above 1 mol/L]").codes).toEqual(["unknown-place"]);
  });
});
