import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { Part, type Plant } from "../../src/compile/plant.js";
import { parseNetwork } from "../../src/parse/network.js";
import { plantOf } from "../simulate/plants.js";
import { randomNetwork } from "../simulate/random-network.js";
import { apart, essence, inOtherUnits, oldName, parametric, renamed, reordered } from "./variants.js";

const seeds = fc.integer({ min: 1, max: 1e6 });
const runs = { numRuns: 60, seed: 20261202 };

describe("what leaves solved flows and volumes alone", () => {
  test("other names", () => {
    fc.assert(
      fc.property(seeds, (seed) => {
        const text = randomNetwork(seed);
        expect(apart(essence(plantOf(text)), essence(plantOf(renamed(text)), oldName))).toBeLessThan(1e-12);
      }),
      runs,
    );
  });

  test("another order of the compartments", () => {
    fc.assert(
      fc.property(seeds, fc.integer({ min: 1, max: 20 }), (seed, shift) => {
        const text = randomNetwork(seed);
        const turned = reordered(text, (lines) => {
          const k = shift % lines.length;
          return [...lines.slice(k), ...lines.slice(0, k)].reverse();
        });
        const [a, b] = [text, turned].map((t) => essence(plantOf(t)));
        expect(apart(a, b)).toBeLessThan(1e-12);
      }),
      runs,
    );
  });

  test("other units", () => {
    fc.assert(
      fc.property(seeds, (seed) => {
        const text = randomNetwork(seed);
        expect(apart(essence(plantOf(text)), essence(plantOf(inOtherUnits(text))))).toBeLessThan(1e-12);
      }),
      runs,
    );
  });

  test("values spelled as parameters, and set to what they are", () => {
    fc.assert(
      fc.property(seeds, (seed) => {
        const text = randomNetwork(seed);
        const spelled = plantOf(parametric(text));
        expect(apart(essence(plantOf(text)), essence(spelled))).toBe(0);
        const same = Object.fromEntries(spelled.network.names.map((n) => [n.name, n.value.of(spelled.env)]));
        expect(apart(essence(spelled), essence(plantOf(parametric(text), same)))).toBe(0);
      }),
      runs,
    );
  });
});

describe("every plant is in balance", () => {
  test("what enters a node leaves it; feeds and outlets agree", () => {
    fc.assert(
      fc.property(seeds, (seed) => balanced(plantOf(randomNetwork(seed)))),
      runs,
    );
  });

  test("twice the feed is twice every flow where all divides by shares", () => {
    fc.assert(
      fc.property(seeds, (seed) => {
        const text = randomNetwork(seed).replace(/, exchange: \{[^}]*\}/g, "");
        const plain = reordered(text, (lines) => lines.filter((line) => !line.startsWith("  s")));
        const one = plantOf(plain);
        const two = plantOf(plain, { "feed.flow": 2 * one.feeds[0].flow });
        two.streams.forEach((s, k) => {
          expect(Math.abs(s.flow - 2 * one.streams[k].flow)).toBeLessThan(1e-12 * s.flow);
        });
      }),
      runs,
    );
  });
});

describe("whatever values a fit may try", () => {
  const odd = fc.oneof(
    { weight: 5, arbitrary: fc.double({ min: 0, max: 1.2, noNaN: true }) },
    { weight: 1, arbitrary: fc.double() },
    { weight: 1, arbitrary: fc.constantFrom(0, 1, -1, 1e-300, 1e300, Number.NaN, Number.POSITIVE_INFINITY) },
  );

  test("there is a plant in balance, or a reason why not", () => {
    let plants = 0;
    fc.assert(
      fc.property(seeds, fc.array(odd, { minLength: 40, maxLength: 40 }), fc.boolean(), (seed, values, few) => {
        const { document } = parseNetwork(parametric(randomNetwork(seed)));
        if (!document) throw new Error("no network");
        const moved = document.names.filter((n) => n.role === "parameter" && (!few || n.slot % 5 === 1));
        const settings = Object.fromEntries(moved.map((n, i) => [n.name, values[i % values.length]]));
        const { plant, problems } = compile(document, settings);
        expect(plant === undefined).toBe(problems.length > 0);
        for (const p of problems) expect(p.message).not.toMatch(/undefined|NaN|Infinity/);
        if (!plant) return;
        plants++;
        balanced(plant);
      }),
      { numRuns: 300, seed: 20261203 },
    );
    expect(plants).toBeGreaterThan(30);
  });
});

/** Flows and volumes are numbers, none below zero; of what enters a node nothing is lost or made. */
function balanced(plant: Plant): void {
  const n = plant.nodes.length;
  const [enters, leaves] = [new Float64Array(n), new Float64Array(n)];
  const outlets = new Map(plant.outlets.map((o) => [o.node, o.flow]));
  for (const f of plant.feeds) enters[f.node] += f.flow;
  plant.flow.forEach((q, k) => {
    expect(q).toBeGreaterThanOrEqual(0);
    leaves[plant.from[k]] += q;
    enters[plant.to[k]] += q;
  });
  const largest = Math.max(...enters);
  plant.nodes.forEach((node, i) => {
    const out = leaves[i] + (outlets.get(i) ?? 0);
    expect(Math.abs(enters[i] - out)).toBeLessThanOrEqual(1e-12 * Math.max(enters[i], largest));
    expect(Math.abs(node.inflow - enters[i])).toBeLessThanOrEqual(1e-12 * largest);
    expect(node.volume).toBeGreaterThanOrEqual(0);
    expect(Number.isFinite(node.volume)).toBe(true);
    if (node.part === Part.Joint) expect(node.volume).toBe(0);
  });
  const [fed, gone] = [plant.feeds, plant.outlets].map((all) => all.reduce((sum, x) => sum + x.flow, 0));
  expect(Math.abs(fed - gone)).toBeLessThanOrEqual(1e-12 * largest);
}
