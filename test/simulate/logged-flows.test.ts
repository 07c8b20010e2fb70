import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import { settingsOfDay } from "../../src/fit/settings.js";
import type { Trial } from "../../src/model/trial.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { RefusedError } from "../../src/problems/refused.js";
import { exact } from "../../src/simulate/exact.js";
import { ode } from "../../src/simulate/ode.js";
import { putsOf } from "../../src/simulate/puts.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { trialTracing } from "../../src/simulate/trial-tracing.js";
import { peakOf } from "./plants.js";

const vesselOf = (bodies: string, more = "") =>
  `network: A\nformat: 1\n${more}feeds: {feed: {flow: 2 L/min, to: a}}\ncompartments:\n${bodies}\noutlets: [out]\n`;

/** Every kind of body with splits by share, a recycle, exchange and flows that follow the feed. */
const mixed = vesselOf(
  `  a: {kind: tubular, volume: 3 L, to: b}
  b: {kind: stirred, volume: 4 L, to: {a: 40 %, c: rest}, exchange: {s: corner}}
  s: {kind: stirred, volume: 1 L}
  c: {kind: dispersed, volume: 3 L, peclet: 12, to: d}
  d: {kind: cascade, volume: 2 L, tanks: 2.6, to: {e: 30 %, f: rest}}
  e: {kind: laminar, volume: 1 L, to: out}
  f: {kind: tubular, volume: 1 L, to: out}`,
  "constants: {corner: 0.3 * feed.flow}\n",
);

function load(network: string, log: string, injection = "{at: feed, pulse: 3 g}", feed = flowTable, at = "out") {
  const files: Record<string, string> = { "flow.csv": log };
  const read = (path: string) => files[path.split("/").pop() ?? ""];
  const { document } = parseNetwork(network, { path: "v.yaml" });
  const text = `trial: T\nformat: 1\nflows: {feed: ${feed}}\ninjection: ${injection}\nreadings:\n  - {at: ${at}}\n`;
  const { document: trial, problems } = parseTrial(text, { path: "t.yaml", read });
  if (!document || !trial) throw new Error(problems.map((p) => `${p.code}: ${p.message}`).join("\n"));
  const { plant } = compile(document, settingsOfDay(document, trial, {}));
  if (!plant) throw new Error("no plant");
  return { plant, trial };
}

const flowTable = "{file: flow.csv, time: {column: t, unit: min}, value: {column: q, unit: L/min}}";
const grid = (end: number, n = 60) => Float64Array.from({ length: n + 1 }, (_, i) => (60 * end * i) / n);
const curveOf = ({ plant, trial }: { plant: Plant; trial: Trial }, time: Float64Array) =>
  trialResponse(plant, trial, [{ time }])[0];
const table = (rows: readonly (readonly [number, number])[]) => `t,q\n${rows.map((r) => r.join(",")).join("\n")}\n`;

describe("flows from a log", () => {
  test.each(["{at: feed, pulse: 3 g}", "{at: feed, step: 2 g/L, lasting: 3 min}", "{at: feed, step: 3 g/min}"])(
    "that never changes is the steady flow: %s",
    (injection) => {
      const time = grid(20);
      const log = load(
        mixed,
        table([
          [0, 2],
          [5, 2],
          [11, 2],
        ]),
        injection,
      );
      const steady = load(
        mixed,
        table([
          [0, 2],
          [5, 2],
          [11, 2],
        ]),
        injection,
        "2 L/min",
      );
      const [a, b] = [curveOf(log, time), curveOf(steady, time)];
      const peak = peakOf(b);
      a.forEach((c, i) => {
        expect(Math.abs(c - b[i])).toBeLessThan(1e-8 * peak);
      });
    },
  );

  test("all flows by one factor: against the volume that has passed, the curve is the steady one", () => {
    const rows = [
      [0, 2],
      [4, 3.5],
      [6, 0.7],
      [9, 0.7],
      [13, 2.9],
      [30, 1.4],
    ] as const;
    const log = load(mixed, table(rows));
    const steady = load(mixed, "", undefined, "2 L/min");
    const time = grid(25);
    const passed = time.map((t) => {
      let volume = 0;
      for (let k = 0; k + 1 < rows.length; k++) {
        const [a, qa] = rows[k];
        const [b, qb] = rows[k + 1];
        const h = Math.max(0, Math.min(t / 60, b) - a);
        volume += h * (qa + ((qb - qa) * h) / (b - a) / 2);
      }
      return volume;
    });
    const wanted = curveOf(
      steady,
      passed.map((v) => (60 * v) / 2),
    );
    const found = curveOf(log, time);
    const peak = peakOf(wanted);
    found.forEach((c, i) => {
      expect(Math.abs(c - wanted[i])).toBeLessThan(1e-8 * peak);
    });
  });

  test("a pump's exchange stays while the feed varies: against the tank's own equation, integrated finely", () => {
    const network = vesselOf(
      "  a: {kind: stirred, volume: 3 L, to: out, exchange: {s: 0.8 L/min}}\n  s: {kind: stirred, volume: 2 L}",
    );
    const { plant, trial } = load(
      network,
      table([
        [0, 1],
        [5, 4],
        [8, 0.5],
        [20, 2],
      ]),
    );
    const time = grid(15, 30);
    const found = curveOf({ plant, trial }, time);
    const flow = (t: number) =>
      t < 5 ? 1 + (3 * t) / 5 : t < 8 ? 4 - (3.5 * (t - 5)) / 3 : 0.5 + (1.5 * (t - 8)) / 12;
    const slope = (t: number, [c, s]: readonly number[]) => [(-flow(t) * c + 0.8 * (s - c)) / 3, (0.8 * (c - s)) / 2];
    let y = [3 / 3, 0]; // g/L
    const h = 0.0025;
    for (let i = 0; i <= 30; i++) {
      expect(Math.abs(found[i] - y[0])).toBeLessThan(1e-9);
      for (let k = 0; k < 200; k++) {
        const at = 0.5 * i + k * h;
        const k1 = slope(at, y);
        const k2 = slope(
          at + h / 2,
          y.map((v, j) => v + (h / 2) * k1[j]),
        );
        const k3 = slope(
          at + h / 2,
          y.map((v, j) => v + (h / 2) * k2[j]),
        );
        const k4 = slope(
          at + h,
          y.map((v, j) => v + h * k3[j]),
        );
        y = y.map((v, j) => v + (h / 6) * (k1[j] + 2 * k2[j] + 2 * k3[j] + k4[j]));
      }
    }
  });

  test("a tube shows at t what entered when the volume since was its own", () => {
    const network = vesselOf("  a: {kind: tubular, volume: 5 L, to: out}");
    const { plant, trial } = load(
      network,
      table([
        [0, 1],
        [10, 3],
        [30, 3],
      ]),
      "{at: feed, step: 3 g/min}",
    );
    const time = grid(20, 200);
    const found = curveOf({ plant, trial }, time);
    found.forEach((c, i) => {
      const t = time[i] / 60;
      const volume = (x: number) => (x < 10 ? x + (x * x) / 10 : 20 + 3 * (x - 10));
      const before = volume(t) - 5;
      const entered = before < 0 ? undefined : before < 20 ? -5 + Math.sqrt(25 + 10 * before) : 10 + (before - 20) / 3;
      const wanted = entered === undefined ? 0 : 3 / (entered < 10 ? 1 + entered / 5 : 3);
      expect(Math.abs(c - wanted)).toBeLessThan(1e-11 * 3);
    });
  });

  test.each(["{at: feed, pulse: 3 g}", "{at: feed, step: 2 g/L, lasting: 3 min}"])(
    "tracer is kept: %s",
    (injection) => {
      const { plant, trial } = load(
        mixed,
        table([
          [0, 2],
          [4, 3.5],
          [6, 0.2],
          [9, 0.7],
          [13, 2.9],
        ]),
        injection,
      );
      const [put] = putsOf(plant, trial);
      for (const until of [100, 500, 2000]) {
        const tracing = trialTracing(plant, trial, put, until);
        const balance = tracing.balance(put.drive, until);
        expect(balance.injected).toBeGreaterThan(0);
        expect(balance.closure).toBeLessThan(1e-9);
      }
    },
  );

  test("a washed-out feed of changing flow begins in balance", () => {
    const { plant, trial } = load(
      mixed,
      table([
        [0, 2],
        [4, 3.5],
        [6, 0.7],
      ]),
      "{at: feed, step: {from: 2 g/L, to: 0 g/L}, start: 3 min}",
    );
    const found = curveOf({ plant, trial }, grid(60));
    for (let i = 0; i <= 3; i++) expect(found[i]).toBeCloseTo(2, 12);
    expect(found[60]).toBeLessThan(0.05); // laminar flow takes its time
    for (let i = 1; i <= 60; i++) expect(found[i]).toBeLessThan(found[i - 1] + 1e-8);
  });

  test("an expression that bends flows is followed: rows are put between", () => {
    const network = (exchange: string) =>
      vesselOf(
        "  a: {kind: stirred, volume: 3 L, to: out, exchange: {s: pump}}\n  s: {kind: stirred, volume: 2 L}",
        `constants: {usual: 2 L/min, pump: ${exchange}}\n`,
      );
    const rough = load(
      network("feed.flow * feed.flow / usual"),
      table([
        [0, 1],
        [6, 4],
        [12, 1],
      ]),
    );
    const rows = Array.from({ length: 49 }, (_, i): [number, number] => [i / 4, i <= 24 ? 1 + i / 8 : 7 - i / 8]);
    const fine = load(network("feed.flow * feed.flow / usual"), table(rows));
    const time = grid(12);
    const [a, b] = [curveOf(rough, time), curveOf(fine, time)];
    a.forEach((c, i) => {
      expect(Math.abs(c - b[i])).toBeLessThan(1e-5);
    });
  });
});

test("engines that need steady flows refuse, with the place", () => {
  const { plant, trial } = load(
    mixed,
    table([
      [0, 2],
      [4, 3.5],
      [6, 0.7],
    ]),
  );
  expect(() => trialResponse(plant, trial, [{ time: grid(3) }], exact)).toThrow(RefusedError);
  try {
    trialResponse(plant, trial, [{ time: grid(3) }], exact);
  } catch (e) {
    expect((e as RefusedError).problems[0]).toMatchObject({ code: "flows-vary" });
  }
  expect(trialResponse(plant, trial, [{ time: grid(3) }], ode)[0]).toHaveLength(61);
});

test("a tube with pockets cannot be followed while flows vary", () => {
  const network = vesselOf("  a: {kind: tubular, volume: 3 L, stagnant: {volume: 1 L, exchange: 1 L/min}, to: out}");
  const { plant, trial } = load(
    network,
    table([
      [0, 2],
      [4, 3.5],
      [6, 0.7],
    ]),
  );
  try {
    trialResponse(plant, trial, [{ time: grid(3) }]);
    expect.unreachable();
  } catch (e) {
    expect((e as RefusedError).problems[0]).toMatchObject({ code: "flows-vary-body" });
  }
});
