import { describe, expect, test } from "vitest";
import type { Contents, Trial } from "../../src/model/trial.js";
import { parseTrial } from "../../src/parse/trial.js";
import { RefusedError } from "../../src/problems/refused.js";
import { exact } from "../../src/simulate/exact.js";
import { laplace } from "../../src/simulate/laplace.js";
import { ode } from "../../src/simulate/ode.js";
import { putsOf } from "../../src/simulate/puts.js";
import { engineFor, trace } from "../../src/simulate/trace.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { peakOf, plantOf } from "./plants.js";

const trialOf = (body: string): Trial => {
  const { document, problems } = parseTrial(`trial: T\nformat: 1\n${body}`, { path: "t.yaml" });
  if (!document) throw new Error(problems.map((p) => p.message).join("\n"));
  return document;
};

const readings = (...at: string[]) => `readings: [${at.map((a) => `{at: ${a}}`).join(", ")}]\n`;
const open = (...bodies: string[]) =>
  plantOf(
    `network: Open\nformat: 1\nfeeds: {feed: {flow: 2 L/min, to: a}}\ncompartments:\n${bodies
      .map((b) => `  ${b}\n`)
      .join("")}outlets: [out]\n`,
  );
const clock = Float64Array.from({ length: 41 }, (_, i) => (i < 20 ? 6 * i : 120 + 30 * (i - 20)));

const bodies: Readonly<Record<string, string[]>> = {
  "a tank": ["a: {kind: stirred, volume: 4 L, to: out}"],
  "a tube": ["a: {kind: tubular, volume: 4 L, to: out}"],
  "a chain with backflow and pockets": [
    "a: {kind: stirred, repeat: 3, volume: 4 L, backflow: 30 %, stagnant: {volume: 1 L, exchange: 1 L/min}, to: out}",
  ],
  "a tank with a corner, behind a tube, with a recycle": [
    "a: {kind: tubular, volume: 2 L, to: b}",
    "b: {kind: stirred, volume: 3 L, exchange: {c: 1 L/min}, to: {a: 30 %, out: rest}}",
    "c: {kind: stirred, volume: 1 L}",
  ],
  "axial dispersion": ["a: {kind: dispersed, volume: 4 L, peclet: 12, to: out}"],
  "a laminar tube": ["a: {kind: laminar, volume: 4 L, to: out}"],
  "a cascade behind a tank": [
    "a: {kind: stirred, volume: 1 L, to: b}",
    "b: {kind: cascade, volume: 3 L, tanks: 2.5, stagnant: {volume: 1 L, exchange: 1 L/min}, to: out}",
  ],
  "plug flow past pockets": ["a: {kind: tubular, volume: 4 L, stagnant: {volume: 1 L, exchange: 1 L/min}, to: out}"],
};

describe("a vessel that is full of tracer at the start", () => {
  test.each(Object.entries(bodies))("washes out as after a step down: %s", (_, body) => {
    const plant = open(...body);
    const full = trialOf(`contents: {all: 2 g/L}\n${readings("out", "a")}`);
    const step = trialOf(`injection: {at: feed, step: {from: 2 g/L, to: 0 g/L}}\n${readings("out", "a")}`);
    const wanted = [{ time: clock }, { time: clock }];
    const [seen, expected] = [full, step].map((trial) => trialResponse(plant, trial, wanted));
    seen.forEach((curve, r) => {
      curve.forEach((c, i) => {
        expect(Math.abs(c - expected[r][i])).toBeLessThan(2e-9);
      });
    });
  });

  test.each(Object.entries(bodies))("keeps its tracer: %s", (_, body) => {
    const plant = open(...body);
    const trial = trialOf(`contents: {all: 2 g/L}\n${readings("out")}`);
    for (const until of [30, 120, 600]) {
      let [injected, found] = [0, 0];
      for (const { entry, start, drive, still } of putsOf(plant, trial)) {
        const balance = trace(plant, entry, until - start, engineFor(plant)).balance(drive, until - start);
        injected += balance.injected + (still?.amount ?? 0);
        found += balance.left + balance.inside + (still?.amount ?? 0);
      }
      const held = 2 * plant.volume.active;
      // a step's drive and its counterpart grow while their difference stays
      if (engineFor(plant) === exact) expect(injected).toBeCloseTo(held, 12);
      expect(Math.abs(found - held)).toBeLessThan(1e-9 * held);
    }
  });
});

test("the engines agree on a loop that starts with one part full", () => {
  const plant = plantOf(
    "network: Loop\nformat: 1\ncompartments:\n  tank: {kind: stirred, volume: 40 L, to: {pipe: 4 L/min}}\n  pipe: {kind: tubular, volume: 8 L, to: tank}\n",
  );
  const trial = trialOf(`contents: {pipe: 2 g/L}\n${readings("tank", "pipe")}`);
  const wanted = [{ time: clock }, { time: clock }];
  const [a, b, c] = [exact, ode, laplace].map((engine) => trialResponse(plant, trial, wanted, engine));
  a.forEach((curve, r) => {
    curve.forEach((v, i) => {
      expect(Math.abs(v - b[r][i])).toBeLessThan(1e-9 * peakOf(curve));
      expect(Math.abs(v - c[r][i])).toBeLessThan(1e-9 * peakOf(curve));
    });
  });
});

test("a name inside another has its own level; members, pockets and parts of chains are covered by theirs", () => {
  const plant = open(
    "a: {kind: stirred, repeat: 3, volume: 3 L, stagnant: {volume: 3 L, exchange: 1 L/min}, to: b}",
    "b: {kind: stirred, volume: 5 L, to: out}",
  );
  const amounts = (contents: string): number => {
    const puts = putsOf(plant, trialOf(`contents: {${contents}}\n${readings("out")}`));
    return puts.reduce((sum, p) => sum + p.drive.amount, 0);
  };
  expect(amounts("a: 2 g/L")).toBeCloseTo(0.012, 14);
  expect(amounts("a.2: 2 g/L")).toBeCloseTo(0.004, 14);
  expect(amounts("a: 2 g/L, a.2: 1 g/L")).toBeCloseTo(0.01, 14);
  expect(amounts("all: 1 g/L, a: 0 g/L")).toBeCloseTo(0.005, 14);
});

test("before the start nothing moves, and a slow detector has settled on it", () => {
  const plant = open("a: {kind: stirred, volume: 4 L, to: out}");
  const trial = trialOf(`contents: {a: 2 g/L}\nreadings: [{at: out}, {at: out, line: {lag: 1 min, delay: 0.5 min}}]\n`);
  const times = Float64Array.of(-60, 0, 30, 90);
  const [plain, lagged] = trialResponse(plant, trial, [{ time: times }, { time: times }]);
  expect([...plain.slice(0, 2)]).toEqual([2, 2]);
  // 2 min in the tank, 1 min in the detector: c = 2 (2 e^(-t/2) - e^-t), half a minute late
  const seen = (t: number) => 2 * (2 * Math.exp(-t / 2) - Math.exp(-t));
  [2, 2, 2, seen(1)].forEach((c, i) => {
    expect(lagged[i]).toBeCloseTo(c, 10);
  });
});

test("what stays beyond open ends is not known, and said so", () => {
  const plant = open("a: {kind: dispersed, volume: 4 L, peclet: 12, ends: open, to: out}");
  const trial = trialOf(`contents: {a: 2 g/L}\n${readings("out")}`);
  expect(() => trialResponse(plant, trial, [{ time: clock }])).toThrow(RefusedError);
  expect((trial.contents as Contents).levels.map((l) => l.of)).toEqual(["a"]);
});
