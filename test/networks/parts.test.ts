import { readdirSync, readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import { flowSheet } from "../../src/draw/flow-sheet.js";
import { drawNetwork } from "../../src/draw/network.js";
import { type NetworkDocument, parseNetwork } from "../../src/parse/network.js";
import { printProblems } from "../../src/problems/print.js";
import { runChecks } from "../../src/simulate/checks.js";
import { moments } from "../../src/simulate/moments.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { partsReadme } from "./parts-readme.js";

const folder = new URL("../../shared/parts/", import.meta.url);
const names = readdirSync(folder)
  .filter((file) => file.endsWith(".yaml"))
  .map((file) => file.slice(0, -".yaml".length));

function load(name: string): NetworkDocument {
  const { document, problems } = parseNetwork(readFileSync(new URL(`${name}.yaml`, folder), "utf8"), { path: name });
  expect(printProblems(problems)).toBe("");
  if (!document) throw new Error(name);
  return document;
}

function plantOf(name: string, settings: Record<string, number> = {}): Plant {
  const { plant, problems } = compile(load(name), settings);
  if (!plant) throw new Error(printProblems(problems));
  return plant;
}

test.each(names)("%s is sound, keeps its checks, and looks like its picture", async (name) => {
  const plant = plantOf(name);
  const results = runChecks(plant);
  expect(results.length).toBeGreaterThan(1);
  for (const { check, holds } of results) expect([check.what, check.of, holds]).toEqual([check.what, check.of, true]);
  expect(plant.network.notes).toMatch(/memory|no single source/);
  await expect(`${drawNetwork(flowSheet(plant))}\n`).toMatchFileSnapshot(`../../shared/parts/${name}.svg`);
});

test("the page of parts tells all of them", async () => {
  const page = partsReadme(new Map(names.map((name) => [name, load(name)])));
  await expect(page).toMatchFileSnapshot("../../shared/parts/README.md");
});

/** Any part may be placed: alone in another network it does what it does by itself, at another flow and volume in proportion. */
test.each(names)("%s placed in another network is the same vessel, scaled", (name) => {
  const alone = plantOf(name);
  const { flow } = alone.feeds[0];
  const text = `network: Around
format: 1
constants: {size: ${3 * alone.volume.total} m3}
feeds: {feed: {flow: ${2 * flow} m3/s, to: p}}
compartments: {p: {kind: part, use: ${name}.yaml, with: {total: size}, to: out}}
outlets: [out]
`;
  const { document, problems } = parseNetwork(text, { read: (path) => readFileSync(new URL(path, folder)) });
  expect(printProblems(problems)).toBe("");
  const placed = document && compile(document).plant;
  if (!placed) throw new Error("no plant");
  const [a, b] = [alone, placed].map((plant) => moments(plant, plant.feeds[0].node)[plant.outlets[0].node]);
  expect(b.mean / a.mean / 1.5).toBeCloseTo(1, 10);
  expect(b.variance / b.mean ** 2 / (a.variance / a.mean ** 2)).toBeCloseTo(1, 10);
});

describe("what their sources say of them", () => {
  /** Variance over the square of the mean. */
  const spread = (name: string, settings: Record<string, number>): number => {
    const plant = plantOf(name, settings);
    const { mean, variance } = moments(plant, plant.feeds[0].node)[plant.outlets[0].node];
    return variance / mean ** 2;
  };

  test("bypass and dead water: the washout of Cholette & Cloutier (1959)", () => {
    for (const [bypass, mixed] of [
      [0.1, 0.8],
      [0.35, 0.5],
    ]) {
      const plant = plantOf("bypass-and-dead-water", { bypass, mixed });
      const times = [1000, 4000, 20_000];
      const [{ value }] = tracerResponse(plant, { at: "feed", form: "step" }, times).readings;
      const theta = (t: number) => (t * plant.feeds[0].flow) / plant.volume.total;
      times.forEach((t, i) => {
        expect(value[i]).toBeCloseTo(1 - (1 - bypass) * Math.exp((-(1 - bypass) * theta(t)) / mixed), 10);
      });
    }
  });

  test("tube then tank: F = 1 - exp(-(theta - p (1 - m)) / ((1 - p)(1 - m))), Wolf & Resnick (1963)", () => {
    const [p, m] = [0.4, 0.25];
    const plant = plantOf("tube-then-tank", { plug: p, dead: m });
    const times = [1000, 2500, 9000];
    const [{ value }] = tracerResponse(plant, { at: "feed", form: "step" }, times).readings;
    times.forEach((t, i) => {
      const theta = (t * plant.feeds[0].flow) / plant.volume.total;
      const late = theta - p * (1 - m);
      expect(value[i]).toBeCloseTo(late < 0 ? 0 : 1 - Math.exp(-late / ((1 - p) * (1 - m))), 10);
    });
  });

  test("spreads in closed form", () => {
    // From the balances: a corner adds 2 corner^2 / renewal, whatever the body.
    expect(spread("quiet-corner", { corner: 0.3, renewal: 0.05 })).toBeCloseTo(1 + (2 * 0.3 ** 2) / 0.05, 9);
    expect(spread("stagnant-cells", { stagnant: 0.25, renewal: 0.4 })).toBeCloseTo(0.1 + (2 * 0.25 ** 2) / 0.4, 9);
    expect(spread("side-capture", { pockets: 0.2, capture: 0.5 })).toBeCloseTo(1 + 0.2 ** 2 / 0.5, 9);
    // Recycle tube: R / (1 + R). Gillespie & Carberry (1966), from memory.
    expect(spread("recycle-tube", { "recycle-ratio": 4 })).toBeCloseTo(0.8, 9);
    // Cells with backflow f: (1 + 2 f) / N - 2 f (1 + f) (1 - (f / (1 + f))^N) / N^2. Roemer & Durbin (1967), from memory.
    const [f, n] = [1.5, 8];
    const expected = (1 + 2 * f) / n - (2 * f * (1 + f) * (1 - (f / (1 + f)) ** n)) / n ** 2;
    expect(spread("backflow-cells", { backflow: f })).toBeCloseTo(expected, 9);
    // A mixture of two gamma curves of 12 tanks.
    const [fast, room] = [0.4, 0.2];
    const second = [fast, 1 - fast].map((w, i) => w * ((i === 0 ? room : 1 - room) / w) ** 2 * (1 + 1 / 12));
    expect(spread("parallel-channels", { fast, room })).toBeCloseTo(second[0] + second[1] - 1, 9);
  });

  test("much pumping makes one stirred tank of the impeller loops", () => {
    expect(spread("impeller-loops", { pumping: 1e4 })).toBeCloseTo(1, 3);
    expect(spread("impeller-loops", { pumping: 2 })).toBeLessThan(0.95);
  });
});
