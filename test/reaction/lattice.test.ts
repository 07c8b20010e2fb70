import { describe, expect, test } from "vitest";
import type { Plant } from "../../src/compile/plant.js";
import { steadyState } from "../../src/reaction/steady.js";
import { transferFunction } from "../../src/transfer/transfer-function.js";
import { plantOf as fromText } from "../simulate/plants.js";
import { uniformSource } from "../simulate/seeded.js";
import { vessel } from "../transfer/vessel.js";
import { chemistryOf, decay, dutyOf, left, plantOf, power, type Sketch } from "./make.js";

/** Cells n x n x n, volumes spread over `decades`; 1 down every column, 0.5 to 2 across, up to 0.5 both ways between layers. */
function lattice(n: number, decades: number): Sketch {
  const random = uniformSource(777000 + n);
  const cells: Record<string, number> = {};
  const links: [string, string, number][] = [];
  const name = (x: number, y: number, z: number): string => `c${x}-${y}-${z}`;
  const both = (a: string, b: string, q: number): number => links.push([a, b, q], [b, a, q]);
  for (let z = 0; z < n; z++) {
    for (let y = 0; y < n; y++) {
      for (let x = 0; x < n; x++) {
        const here = name(x, y, z);
        cells[here] = 0.6 + 0.8 * random();
        if (decades > 0) cells[here] = 10 ** (decades * (random() - 0.75));
        if (x + 1 < n) both(here, name(x + 1, y, z), 0.5 + 1.5 * random());
        if (y + 1 < n) both(here, name(x, y + 1, z), 0.5 + 1.5 * random());
        if (z + 1 < n) both(here, name(x, y, z + 1), 0.5 * random());
        links.push([z === 0 ? "feed" : name(x, y, z - 1), here, 1]);
        if (z === n - 1) links.push([here, "out", 1]);
      }
    }
  }
  return { cells, links };
}

const consecutive = (k1: number, k2: number) =>
  chemistryOf(["A", "B", "R", "S"], { k1, k2 }, [
    power(4, [1, 1, 0, 0], [-1, -1, 1, 0]),
    power(5, [0, 1, 1, 0], [0, -1, -1, 1]),
  ]);

/** Largest imbalance of a cell, from the concentrations alone: what enters, less what leaves, plus what reacts. */
function imbalance(plant: Plant, c: Float64Array, k1: number, k2: number): number {
  const n = 4;
  const sum = new Float64Array(c.length);
  for (let l = 0; l < plant.flow.length; l++) {
    for (let i = 0; i < n; i++) {
      const carried = plant.flow[l] * c[plant.from[l] * n + i];
      sum[plant.to[l] * n + i] += carried;
      sum[plant.from[l] * n + i] -= carried;
    }
  }
  let worst = 0;
  plant.nodes.forEach(({ volume, inflow }, node) => {
    if (!(volume > 0)) return;
    const [a, b, r] = c.subarray(node * n);
    const [first, second] = [volume * k1 * a * b, volume * k2 * r * b];
    [-first, -first - second, first - second, second].forEach((made, i) => {
      worst = Math.max(worst, Math.abs(sum[node * n + i] + made) / inflow);
    });
  });
  return worst;
}

describe.each([0, 4])("A + B -> R, R + B -> S in 1000 cells whose volumes spread over %d decades", (decades) => {
  const plant = plantOf(lattice(10, decades));
  const chemistry = consecutive(2, 0.5);
  const s = steadyState(plant, chemistry, dutyOf(chemistry, { feed: { A: 1, B: 1.2 } }));

  test("every cell balances, and so does the whole", () => {
    expect(s.converged).toBe(true);
    expect(imbalance(plant, s.concentrations, 2, 0.5)).toBeLessThan(1e-12);
    for (const c of s.closure) expect(Math.abs(c)).toBeLessThan(1e-11);
    expect(s.conserved).toBeLessThan(1e-12);
    expect(Math.min(...s.concentrations)).toBeGreaterThanOrEqual(0);
  });

  test("a first-order reaction leaves what the transfer function says", () => {
    const first = decay(0.7, 1);
    const decayed = steadyState(plant, first, dutyOf(first, { feed: { A: 1 } }));
    const g = transferFunction(plant, 0.7).out;
    expect(Math.abs((1 - left(decayed.fed, decayed.left)) / g - 1)).toBeLessThan(1e-10);
  });
});

test("feeds that differ: what no reaction changes only mixes, and closes", () => {
  const sketch = lattice(7, 2);
  const links = sketch.links.map(([a, b, q]): [string, string, number] => [
    a === "feed" && b.startsWith("c0") ? "feed2" : a,
    b,
    q,
  ]);
  const plant = plantOf({ ...sketch, links });
  const chemistry = consecutive(2, 0.5);
  const s = steadyState(plant, chemistry, dutyOf(chemistry, { feed: { A: 1 }, feed2: { B: 6, S: 0.3 } }));
  expect(s.converged).toBe(true);
  expect(imbalance(plant, s.concentrations, 2, 0.5)).toBeLessThan(1e-11);
  expect(s.conserved).toBeLessThan(1e-11);
  for (const c of s.closure) expect(Math.abs(c)).toBeLessThan(1e-9);
});

test("bodies of every kind in a large circle are solved with its cells", () => {
  const plant = fromText(
    vessel(`  a: {kind: stirred, repeat: 300, backflow: 2 L/min, volume: 3 L, to: b}
  b: {kind: tubular, volume: 1 L, to: {c: 40 %, d: 30 %, e: rest}}
  c: {kind: laminar, volume: 1 L, to: f}
  d: {kind: dispersed, volume: 1 L, peclet: 30, to: f}
  e: {kind: cascade, volume: 1 L, tanks: 2.4, stagnant: {volume: 1 L, exchange: 0.2 L/min}, to: f}
  f: {kind: junction, to: {a: 60 %, out: rest}}`),
  );
  for (const k of [0.01]) {
    const first = decay(k, 1);
    const decayed = steadyState(plant, first, dutyOf(first, { in: { A: 1 } }));
    expect(decayed.converged).toBe(true);
    const g = transferFunction(plant, k).out;
    expect(Math.abs((1 - left(decayed.fed, decayed.left)) / g - 1)).toBeLessThan(1e-10);
  }
  const chemistry = consecutive(2 / 60, 0.5 / 60);
  const s = steadyState(plant, chemistry, dutyOf(chemistry, { in: { A: 1, B: 1.2 } }));
  expect(s.converged).toBe(true);
  expect(s.conserved).toBeLessThan(1e-11);
  for (const c of s.closure) expect(Math.abs(c)).toBeLessThan(1e-10);
});

test("without a chemistry a large circle only mixes", () => {
  const s = steadyState(plantOf(lattice(7, 2)), undefined, dutyOf(undefined, { feed: { tracer: 3 } }));
  expect(s.converged).toBe(true);
  expect(s.outlets[0].concentrations[0]).toBeCloseTo(3, 12);
});
