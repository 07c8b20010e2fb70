import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { Part, type Plant } from "../../src/compile/plant.js";
import { factor, solve } from "../../src/numerics/lu.js";
import { steadyState } from "../../src/reaction/steady.js";
import { chemistryOf, decay, dutyOf, plantOf, power, type Sketch } from "./make.js";

/** A path from feed to outlet through some bodies, and closed circulations laid over it: balanced whatever the draws. */
const sketch: fc.Arbitrary<Sketch> = fc
  .record({
    bodies: fc.array(fc.record({ tube: fc.boolean(), volume: fc.double({ min: 0.05, max: 5, noNaN: true }) }), {
      minLength: 2,
      maxLength: 6,
    }),
    rings: fc.array(
      fc.record({
        along: fc.array(fc.nat(5), { minLength: 2, maxLength: 4 }),
        flow: fc.double({ min: 0.01, max: 20, noNaN: true }),
      }),
      { maxLength: 3 },
    ),
    bypass: fc.double({ min: 0.01, max: 0.5, noNaN: true }),
  })
  .map(({ bodies, rings, bypass }) => {
    const names = bodies.map((b, i) => `${b.tube ? "tube" : "cell"}${i}`);
    const pick = (tube: boolean) =>
      Object.fromEntries(bodies.flatMap((b, i) => (b.tube === tube ? [[names[i], b.volume]] : [])));
    const path = ["feed", ...names, "out"];
    const links = path.slice(1).map((to, i): [string, string, number] => [path[i], to, 1 - bypass]);
    links.push(["feed", "out", bypass]);
    for (const { along, flow } of rings) {
      const stops = along.map((k) => names[k % names.length]);
      for (const [i, from] of stops.entries()) links.push([from, stops[(i + 1) % stops.length], flow]);
    }
    return { cells: pick(false), tubes: pick(true), links };
  });

/** What leaves when all decays at k: node equations y = G(k) mix, solved densely. */
function transfer(plant: Plant, k: number): number {
  const n = plant.nodes.length;
  const a = new Float64Array(n * n);
  const b = new Float64Array(n);
  plant.nodes.forEach(({ part, volume, inflow }, i) => {
    const tau = volume / inflow;
    const gain = part === Part.Cell ? 1 / (1 + k * tau) : Math.exp(-k * tau);
    a[i * n + i] += 1;
    plant.flow.forEach((q, l) => {
      if (plant.to[l] === i) a[i * n + plant.from[l]] -= (gain * q) / inflow;
    });
  });
  b[plant.feeds[0].node] = 1;
  const lu = factor(a, n);
  if (lu === "singular") throw new Error("singular");
  solve(lu, b);
  return b[plant.outlets[0].node];
}

describe("random networks with recycles, tubes inside loops and a bypass", () => {
  test("first order agrees with the transfer function at k to 1e-10", () => {
    fc.assert(
      fc.property(sketch, fc.double({ min: 0.01, max: 10, noNaN: true }), (drawn, k) => {
        const plant = plantOf(drawn);
        const chemistry = decay(k, 1);
        const s = steadyState(plant, chemistry, dutyOf(chemistry, { feed: { A: 1 } }));
        expect(s.converged).toBe(true);
        expect(Math.abs(s.outlets[0].concentrations[0] - transfer(plant, k))).toBeLessThan(1e-10);
      }),
      { numRuns: 60, seed: 5 },
    );
  });

  test("two reactions of second order: balances close, nothing is negative", () => {
    const chemistry = chemistryOf(["A", "B", "P", "S"], { k1: 3, k2: 0.4 }, [
      power(4, [1, 1, 0, 0], [-1, -1, 1, 0]),
      power(5, [0, 1, 1, 0], [0, -1, -1, 1]),
    ]);
    fc.assert(
      fc.property(sketch, (drawn) => {
        const plant = plantOf(drawn);
        const s = steadyState(plant, chemistry, dutyOf(chemistry, { feed: { A: 1, B: 1.4 } }));
        expect(s.converged).toBe(true);
        for (const c of s.concentrations) expect(c).toBeGreaterThanOrEqual(0);
        for (const gap of s.closure) expect(Math.abs(gap)).toBeLessThan(1e-9);
        const [a, b, p, x] = s.left;
        expect(Math.abs(a + p + x - 1)).toBeLessThan(1e-9);
        expect(Math.abs(b + p + 2 * x - 1.4)).toBeLessThan(1e-9);
      }),
      { numRuns: 40, seed: 7 },
    );
  });
});

test("a thousand cells with backflow are one loop, solved together", () => {
  const n = 1000;
  const links: [string, string, number][] = [["feed", "c0", 1]];
  for (let i = 1; i < n; i++) links.push([`c${i - 1}`, `c${i}`, 3], [`c${i}`, `c${i - 1}`, 2]);
  links.push([`c${n - 1}`, "out", 1]);
  const cells = Object.fromEntries(Array.from({ length: n }, (_, i) => [`c${i}`, 10 / n]));
  const chemistry = decay(0.3, 2);
  const s = steadyState(plantOf({ cells, links }), chemistry, dutyOf(chemistry, { feed: { A: 1 } }));
  expect(s.converged).toBe(true);
  expect(Math.abs(s.closure[0])).toBeLessThan(1e-10);
  // Many cells with a little backflow come near the tube: 1 / (1 + k tau) = 0.25, from above.
  expect(s.outlets[0].concentrations[0]).toBeGreaterThan(0.25);
  expect(s.outlets[0].concentrations[0]).toBeLessThan(0.252);
});
