import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import type { Block } from "../../src/compartments/block.js";
import { cascade } from "../../src/compartments/cascade.js";
import type { NodeMaker } from "../../src/compartments/kind.js";
import { moments } from "../../src/simulate/moments.js";
import { transferFunction } from "../../src/transfer/transfer-function.js";
import { plantOf } from "../simulate/plants.js";
import { vessels } from "../simulate/vessels.js";
import { vessel } from "./vessel.js";

// 30-digit closed forms; formulas and sources in shared/reference/closed-forms/models.json
const rows = readFileSync("shared/reference/closed-forms/curves-moments-conversions.csv", "utf8")
  .split("\n")
  .slice(1)
  .map((line) => line.split(","))
  .map(([name, quantity, argument, value]) => ({ name, quantity, argument, value: Number(value) }));
const rowsOf = (name: string, quantity: string) => rows.filter((r) => r.name === name && r.quantity === quantity);
const conversions = (name: string) => {
  const mean = rowsOf(name, "mean")[0].value;
  return rowsOf(name, "conversion-first-order").map(({ argument, value }) => ({
    k: Number(argument.replace("k*mean=", "")) / mean,
    wanted: value,
  }));
};

const minute = 60;
const body = (keys: string) => vessel(`  a: {${keys}, to: out}`);
const all: Readonly<Record<string, string>> = {
  ...vessels,
  "gamma-N2.5-tau4": body("kind: cascade, volume: 4 L, tanks: 2.5"),
  "gamma-N4.76-tau15": body("kind: cascade, volume: 15 L, tanks: 4.76"),
  "dispersion-closed-Pe1-tau1": body("kind: dispersed, volume: 1 L, peclet: 1"),
  "dispersion-closed-Pe8-tau20": body("kind: dispersed, volume: 20 L, peclet: 8, ends: closed"),
  "dispersion-closed-Pe40-tau1": body("kind: dispersed, volume: 1 L, peclet: 40"),
  "dispersion-open-Pe4-tau1": body("kind: dispersed, volume: 1 L, peclet: 4, ends: open"),
  "dispersion-open-Pe20-tau6": body("kind: dispersed, volume: 6 L, peclet: 20, ends: open"),
  "laminar-tau2": body("kind: laminar, volume: 2 L"),
};
const asDocument = "a cascade of less than one tank is refused as a document";

test("every case has its vessel", () => {
  const cases: { case: string }[] = JSON.parse(readFileSync("shared/reference/closed-forms/cases.json", "utf8"));
  const missing = cases.map((c) => c.case).filter((name) => !(name in all));
  expect(missing, asDocument).toEqual(["gamma-N0.8-tau1"]);
});

describe.each(Object.keys(all))("%s", (name) => {
  const plant = plantOf(all[name]);

  test("first-order conversions are 1 - G(k)", () => {
    const points = conversions(name);
    expect(points.length).toBe(4);
    const { out } = transferFunction(
      plant,
      points.map(({ k }) => k / minute),
    );
    points.forEach(({ wanted }, i) => {
      expect(Math.abs(1 - out[i] - wanted)).toBeLessThan(1e-12);
    });
  });

  test("moments", () => {
    const [{ node }] = plant.outlets;
    const { share, mean, variance, skewness } = moments(plant, plant.entry.get("in") as number)[node];
    expect(share).toBeCloseTo(1, 14);
    expect(Math.abs(mean / minute / rowsOf(name, "mean")[0].value - 1)).toBeLessThan(1e-12);
    const wanted = rowsOf(name, "variance")[0]?.value ?? Number.NaN;
    if (!Number.isFinite(wanted)) {
      expect([variance, skewness]).toEqual([Number.POSITIVE_INFINITY, undefined]);
      return;
    }
    expect(Math.abs(variance / minute ** 2 - wanted)).toBeLessThan(1e-12 * Math.max(wanted, mean / minute));
    const third = rowsOf(name, "third-central-moment")[0]?.value;
    if (third !== undefined && wanted > 0) {
      expect(Math.abs((skewness as number) / (third / wanted ** 1.5) - 1)).toBeLessThan(1e-9);
    }
  });
});

test("a gamma shape under 1", () => {
  const made: Block[] = [];
  const maker = { through: 1, block: (block: Block) => made.push(block) - 1 } as unknown as NodeMaker;
  const values = { volume: 1, tanks: 0.8 };
  cascade.spell(maker, { values, counts: {}, words: {}, shares: new Set(["tanks"]) });
  const points = conversions("gamma-N0.8-tau1");
  expect(points.length).toBe(4);
  for (const { k, wanted } of points) {
    expect(Math.abs(1 - made[0].transfer({ re: k, im: 0 }, 1).re - wanted)).toBeLessThan(1e-12);
  }
});
