import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import type { Plant } from "../../src/compile/plant.js";
import { conditionsOf } from "../../src/reaction/conditions.js";
import { steadyState } from "../../src/reaction/steady.js";
import { transferFunction } from "../../src/transfer/transfer-function.js";
import { closedFormPlants } from "../simulate/block-vessels.js";
import { plantOf } from "../simulate/plants.js";
import { randomBlocks } from "../transfer/random-blocks.js";
import { vessel } from "../transfer/vessel.js";
import { chemistryOf, decay, dutyOf, left, power } from "./make.js";

const body = (keys: string): Plant => plantOf(vessel(`  a: {kind: ${keys}, to: out}`));

/** Conversion of A, fed at 1, by order n; k in 1/min. */
function converted(plant: Plant, k: number, n: number): number {
  const chemistry = decay(k / 60, n);
  const s = steadyState(plant, chemistry, dutyOf(chemistry, { in: { A: 1 } }));
  expect(s.converged).toBe(true);
  return left(s.fed, s.left);
}

const pockets = "stagnant: {volume: 0.5 L, exchange: 0.3 L/min}";
const bodies = [
  "laminar, volume: 1 L",
  "cascade, volume: 1 L, tanks: 1",
  "cascade, volume: 1 L, tanks: 1.3",
  "cascade, volume: 1 L, tanks: 1000",
  `cascade, volume: 1 L, tanks: 3.4, ${pockets}`,
  `cascade, volume: 0 L, tanks: 3.4, ${pockets}`,
  `tubular, volume: 1 L, ${pockets}`,
  `tubular, volume: 0 L, ${pockets}`,
  `stirred, volume: 1 L, repeat: 4, backflow: 30 %, ${pockets}`,
  ...["0.01", "1", "40", "1e4"].map((pe) => `dispersed, volume: 1 L, peclet: ${pe}`),
  `dispersed, volume: 1 L, peclet: 8, ${pockets}`,
];

describe("a first-order reaction leaves what the transfer function says at s = k, to 1e-10", () => {
  test.each(bodies)("%s", (keys) => {
    const plant = body(keys);
    for (const da of [0.01, 1, 10]) {
      const g = transferFunction(plant, da / 60).out;
      expect(Math.abs((1 - converted(plant, da, 1)) / g - 1)).toBeLessThan(1e-10);
    }
  });

  test("between open ends it reacts as between closed ones (Wehner & Wilhelm 1956)", () => {
    const [open, closed] = ["open", "closed"].map((ends) => body(`dispersed, volume: 1 L, peclet: 6, ends: ${ends}`));
    for (const n of [1, 2]) expect(converted(open, 2, n)).toBe(converted(closed, 2, n));
  });

  test("in random networks of all kinds with recycles", () => {
    for (let seed = 1; seed <= 24; seed++) {
      const plant = plantOf(randomBlocks(seed, true));
      const chemistry = decay(1e-3, 1);
      const s = steadyState(plant, chemistry, dutyOf(chemistry, { feed: { A: 1 } }));
      expect(s.converged, `seed ${seed}`).toBe(true);
      const g = transferFunction(plant, 1e-3);
      for (const { name, flow, concentrations } of s.outlets) {
        const out = (flow * concentrations[0]) / s.feeds[0].flow;
        expect(Math.abs(out / g[name] - 1), `seed ${seed}, ${name}`).toBeLessThan(1e-10);
      }
    }
  });
});

/** Rows of a table of closed forms that start with one of these cases. */
const rowsOf = (file: string, cases: RegExp): string[] =>
  readFileSync(`shared/reference/closed-forms/${file}`, "utf8")
    .trim()
    .split("\n")
    .filter((line) => cases.test(line));

describe("orders other than one", () => {
  const dispersion = rowsOf("network-conversions.csv", /^dispersion/).map((line) => {
    const [order, da, conversion] = line.split(",").slice(-5).map(Number);
    return { name: line.slice(0, line.indexOf(",")), order, da, conversion };
  });
  test.each(dispersion)("$name, order $order, in the table of conversions", ({ name, order, da, conversion }) => {
    const peclet = /-Pe([\d.]+)-/.exec(name)?.[1];
    expect(Math.abs(converted(body(`dispersed, volume: 1 L, peclet: ${peclet}`), da, order) - conversion)).toBeLessThan(
      1e-12,
    );
  });

  const segregated = rowsOf(
    "curves-moments-conversions.csv",
    /^(gamma-N2.5|gamma-N4.76|laminar).*conversion-segregated/,
  );
  test.each(segregated)("%s", (line) => {
    const [name, quantity, argument, conversion] = line.split(",");
    const order = Number(quantity.slice(quantity.lastIndexOf("-") + 1));
    const mean = Number(name.slice(name.lastIndexOf("tau") + 3));
    const k = Number(argument.slice(argument.indexOf("=", 10) + 1)) / mean;
    expect(Math.abs(converted(closedFormPlants[name](), k, order) - Number(conversion))).toBeLessThan(1e-11);
  });

  test("a cascade of whole tanks is segregated, tanks in a row are mixed: order 2, n 3, Da 6.3", () => {
    expect(converted(body("cascade, volume: 1 L, tanks: 3"), 6.3, 2)).toBeCloseTo(0.824, 4);
    expect(converted(body("stirred, volume: 1 L, repeat: 3"), 6.3, 2)).toBeCloseTo(0.7907, 4);
  });

  // A row of many mixed cells with a pocket each tends to plug flow past pockets; dispersed at Pe near 0 is one such cell.
  test.each([
    ["tubular, volume: 1 L", "stirred, volume: 1 L"],
    ["dispersed, volume: 1 L, peclet: 0.001", "stirred, volume: 1 L"],
  ])("pockets, order 2: %s", (keys, cells) => {
    const smooth = converted(body(`${keys}, ${pockets}`), 2, 2);
    if (keys.includes("tubular")) {
      const [coarse, fine] = [400, 800].map((n) => converted(body(`${cells}, repeat: ${n}, ${pockets}`), 2, 2));
      expect(Math.abs(2 * fine - coarse - smooth)).toBeLessThan(1e-6);
    } else expect(Math.abs(converted(body(`${cells}, ${pockets}`), 2, 2) - smooth)).toBeLessThan(2e-4);
  });

  test("what runs out on the way leaves nothing; before, a zero order converts k V/Q", () => {
    const long = body("dispersed, volume: 1 L, peclet: 8");
    expect(converted(long, 0.5, 0)).toBeCloseTo(0.5, 9);
    expect(converted(long, 2, 0)).toBeGreaterThan(1 - 1e-6);
    expect(converted(long, 4, 0.5)).toBeGreaterThan(1 - 1e-6);
    expect(converted(body("laminar, volume: 1 L"), 2, 0)).toBe(1);
  });
});

describe("A + B -> R, R + B -> S in a loop of all kinds", () => {
  const plant = plantOf(
    vessel(`  a: {kind: dispersed, volume: 2 L, peclet: 5, ${pockets}, to: {b: 70 %, c: rest}}
  b: {kind: laminar, volume: 1 L, to: d}
  c: {kind: cascade, volume: 1 L, tanks: 2.5, to: d}
  d: {kind: tubular, volume: 1 L, ${pockets}, to: {a: 60 %, out: rest}}`),
  );
  const chemistry = chemistryOf(["A", "B", "R", "S"], { k1: 2 / 60, k2: 0.5 / 60 }, [
    power(4, [1, 1, 0, 0], [-1, -1, 1, 0]),
    power(5, [0, 1, 1, 0], [0, -1, -1, 1]),
  ]);
  const duty = dutyOf(chemistry, { in: { A: 1, B: 1.2 } });
  const s = steadyState(plant, chemistry, duty);

  test("converges, and everything closes", () => {
    expect(s.converged).toBe(true);
    expect(s.conserved).toBeLessThan(1e-12);
    for (const c of s.closure) expect(Math.abs(c)).toBeLessThan(1e-11);
    expect(Math.min(...s.concentrations)).toBeGreaterThanOrEqual(0);
  });

  test("a body alone, fed with what enters it there, makes what it makes in the loop", () => {
    const n = 4;
    const at = (name: string) => s.concentrations.subarray((plant.exit.get(name) as number) * n);
    const alone = plantOf(vessel("  b: {kind: laminar, volume: 1 L, to: out}", "b"), { "in.flow": (0.7 * 2.5) / 6e4 });
    const fed = Object.fromEntries(["A", "B", "R", "S"].map((name, i) => [name, at("a")[i]]));
    const again = steadyState(alone, chemistry, dutyOf(chemistry, { in: fed }));
    for (let i = 0; i < n; i++) expect(again.outlets[0].concentrations[i]).toBeCloseTo(at("b")[i], 11);
  });

  test("species are conserved that no reaction makes or uses", () => {
    const { reactions } = conditionsOf(plant, chemistry, duty);
    expect(reactions.cell.numbers).toHaveLength(2);
    const idle = steadyState(plant, undefined, dutyOf(undefined, { in: { tracer: 3 } }));
    expect(idle.outlets[0].concentrations[0]).toBeCloseTo(3, 12);
    expect(idle.conserved).toBeLessThan(1e-13);
  });
});
