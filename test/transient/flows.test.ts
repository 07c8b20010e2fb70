import { describe, expect, test } from "vitest";
import { laminarStays } from "../../src/compartments/stays.js";
import { compile } from "../../src/compile/compile.js";
import { settingsOfDay } from "../../src/fit/settings.js";
import { quadrature } from "../../src/numerics/quadrature.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { networkSettings } from "../../src/reaction/conditions.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { type Transient, transient } from "../../src/transient/transient.js";

const chemistry = `chemistry: C
format: 1
species: {A: {}, P: {}}
constants: {k: 0.2 1/min, k2: 0.05 L/mol/min}
reactions: [{equation: A -> P, rate: k * A + k2 * A * P}]
`;
const first = chemistry.replace("k2: 0.05", "k2: 0");

interface Asked {
  readonly network: string;
  readonly duty: string;
  readonly until: number;
  readonly count?: number;
  readonly files?: Record<string, string>;
  readonly chemistry?: string;
}

/** Times in minutes. */
function runOf({ network, duty: text, until, count = 60, files = {}, chemistry: law = first }: Asked): Transient {
  const { document, problems } = parseNetwork(`network: A vessel\nformat: 1\n${network}`, { path: "n.yaml" });
  const read = (path: string): string | undefined => ({ "c.yaml": law, ...files })[path];
  const { document: duty, problems: more } = parseDuty(`duty: A duty\nformat: 1\n${text}`, { path: "d.yaml", read });
  expect([...problems, ...more].map((p) => p.message)).toEqual([]);
  if (!document || !duty) throw new Error("unread");
  const { plant } = compile(document, networkSettings(duty));
  if (!plant) throw new Error("no plant");
  const times = Float64Array.from({ length: count + 1 }, (_, k) => (60 * until * k) / count);
  const run = transient(plant, duty.chemistry, duty, times);
  expect(run.stopped).toBeUndefined();
  return run;
}

const closes = (run: Transient, limit = 1e-9): void => {
  for (const c of run.balance?.closure ?? [1]) expect(Math.abs(c)).toBeLessThan(limit);
  expect(run.balance?.conserved).toBeLessThan(limit);
};

const one = (kind: string): string =>
  `feeds: {feed: {flow: 2 L/min, to: body}}
compartments:
  body: {kind: ${kind}, to: out}
outlets: [out]
`;
const fed = "chemistry: c.yaml\nfeeds: {feed: {A: 1 mol/L}}\n";

describe("a flow that jumps, first order, against closed forms", () => {
  // 2 L/min, from 3 min on 5 L/min, from 10 min on as before.
  const upset = `${fed}flows: {feed: {from: 2 L/min, to: 5 L/min, start: 3 min, lasting: 7 min}}`;
  const passed = (t: number): number => 2 * t + 3 * Math.max(0, Math.min(t, 10) - 3);
  /** When that entered which is x litres behind at t. */
  const entered = (t: number, x: number): number => {
    const v = passed(t) - x;
    return v < 6 ? v / 2 : v < 41 ? 3 + (v - 6) / 5 : 10 + (v - 41) / 2;
  };

  test("a stirred tank", () => {
    const run = runOf({ network: one("stirred, volume: 8 L"), duty: upset, until: 25 });
    let [c, at] = [1 / (1 + 0.2 * 4), 0];
    for (const [q, from, to] of [
      [2, 0, 3],
      [5, 3, 10],
      [2, 10, 25],
    ]) {
      const rate = q / 8 + 0.2;
      const end = q / 8 / rate;
      run.times.forEach((s, k) => {
        const t = s / 60;
        if (t < from || t >= to) return;
        expect(
          Math.abs(run.outlets[0].values[2 * k] / 1000 - (end + (c - end) * Math.exp(-rate * (t - at)))),
        ).toBeLessThan(1e-8);
      });
      c = end + (c - end) * Math.exp(-rate * (to - at));
      at = to;
    }
    closes(run);
  });

  test("a tube: each parcel by its own age", () => {
    const run = runOf({ network: one("tubular, volume: 9 L"), duty: upset, until: 25 });
    run.times.forEach((s, k) => {
      const t = s / 60;
      expect(Math.abs(run.outlets[0].values[2 * k] / 1000 - Math.exp(-0.2 * (t - entered(t, 9))))).toBeLessThan(1e-9);
    });
    closes(run);
  });

  test("laminar flow: stays in volume displaced", () => {
    const run = runOf({ network: one("laminar, volume: 9 L"), duty: upset, until: 25, count: 20 });
    run.times.forEach((s, k) => {
      const t = s / 60;
      const kinks = [3, 10].filter((x) => x < t).map((x) => (passed(t) - passed(x)) / 9);
      const { value } = quadrature((x) => laminarStays.density(x) * Math.exp(-0.2 * (t - entered(t, 9 * x))), 0.5, 60, {
        breaks: [...kinks, 1, 2, 4, 8, 16, 32],
        relative: 1e-11,
        absolute: 1e-13,
      });
      expect(Math.abs(run.outlets[0].values[2 * k] / 1000 - value)).toBeLessThan(1e-8);
    });
    closes(run);
  });

  test("a tube whose feed stops keeps what it holds, which reacts on", () => {
    const run = runOf({
      network: one("tubular, volume: 8 L"),
      duty: `${fed}flows: {feed: {from: 2 L/min, to: 0 L/min, start: 1 min, lasting: 6 min}}`,
      until: 16,
    });
    run.times.forEach((s, k) => {
      const t = s / 60;
      const age = 4 + Math.max(0, Math.min(t, 7) - 1) - 6 * Math.max(0, Math.min(1, t >= 11 ? 1 : 0));
      expect(Math.abs(run.outlets[0].values[2 * k] / 1000 - Math.exp(-0.2 * age))).toBeLessThan(1e-7);
    });
    closes(run);
  });

  test("a tank whose feed stops for good is a batch from then on", () => {
    const run = runOf({
      network: one("stirred, volume: 8 L"),
      duty: `${fed}flows: {feed: {from: 2 L/min, to: 0 L/min, start: 2 min}}`,
      until: 12,
    });
    run.times.forEach((s, k) => {
      const c = (1 / 1.8) * Math.exp(-0.2 * Math.max(0, s / 60 - 2));
      expect(Math.abs(run.outlets[0].values[2 * k] / 1000 - c)).toBeLessThan(1e-7);
    });
    closes(run);
  });
});

/** Every kind of body with splits by share, a recycle with a tube, exchange, flows that follow the feed, and a second feed. */
const mixed = `constants: {corner: 0.3 * feed.flow}
feeds: {feed: {flow: 2 L/min, to: a}, side: {flow: 0.5 L/min, to: meet}}
compartments:
  a: {kind: tubular, volume: 3 L, to: b}
  b: {kind: stirred, volume: 4 L, to: {a: 40 %, c: rest}, exchange: {s: corner}}
  s: {kind: stirred, volume: 1 L}
  c: {kind: dispersed, volume: 3 L, peclet: 12, to: meet}
  meet: {kind: junction, to: d}
  d: {kind: cascade, volume: 2 L, tanks: 2.6, to: {e: 30 %, f: rest}}
  e: {kind: laminar, volume: 1 L, to: out}
  f: {kind: tubular, volume: 1 L, to: out}
outlets: [out]
`;
const log = "t,q\n0,2\n2,3\n4,3\n5,1\n9,2.5\n14,2\n";
const logged = "{file: q.csv, time: {column: t, unit: min}, value: {column: q, unit: L/min}}";

describe("flows in a network of every kind", () => {
  test("a logged flow gives what the tracer engine gives", () => {
    const run = runOf({
      network: mixed,
      duty: `feeds: {feed: {A: {from: 0 g/L, to: 2 g/L}}, side: {}}\nflows: {feed: ${logged}}`,
      until: 24,
      files: { "q.csv": log },
    });
    const { document } = parseNetwork(`network: A vessel\nformat: 1\n${mixed}`, { path: "n.yaml" });
    const { document: trial, problems } = parseTrial(
      `trial: T\nformat: 1\nflows: {feed: ${logged}}\ninjection: {at: feed, step: 2 g/L}\nreadings:\n  - {at: out}\n`,
      { path: "t.yaml", read: () => log },
    );
    expect(problems.map((p) => p.message)).toEqual([]);
    if (!document || !trial) throw new Error("unread");
    const { plant } = compile(document, settingsOfDay(document, trial, {}));
    if (!plant) throw new Error("no plant");
    const [seen] = trialResponse(plant, trial, [{ time: run.times }]);
    run.times.forEach((t, k) => {
      // In the very moment of a jump each may tell either side.
      if (t > 0) expect(Math.abs(run.outlets[0].values[k] - seen[k])).toBeLessThan(1e-8);
    });
    closes(run);
  });

  test.each([
    "flows: {feed: {from: 2 L/min, to: 3.1 L/min, start: 1 min, lasting: 4 min}}",
    `contents: {all: {A: 0.5 mol/L}}\nflows: {feed: ${logged}}`,
  ])("what reacts closes: %s", (more) => {
    const run = runOf({
      network: mixed,
      duty: `chemistry: c.yaml\nfeeds: {feed: {A: 1 mol/L}, side: {P: 0.2 mol/L}}\n${more}`,
      until: 16,
      files: { "q.csv": log },
      chemistry,
    });
    closes(run, 2e-9);
  });

  test("a flow that changes nothing changes nothing", () => {
    const duty = "chemistry: c.yaml\nfeeds: {feed: {A: {from: 1 mol/L, to: 2 mol/L, start: 1 min}}, side: {}}\n";
    const asked = { network: mixed, until: 8, chemistry, count: 16 };
    const steady = runOf({ ...asked, duty });
    const same = runOf({ ...asked, duty: `${duty}flows: {feed: {from: 2 L/min, to: 2 L/min, start: 3 min}}` });
    steady.outlets[0].values.forEach((c, k) => {
      expect(Math.abs(c - same.outlets[0].values[k])).toBeLessThan(2e-5);
    });
  });
});
