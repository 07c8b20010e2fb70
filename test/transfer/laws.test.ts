import fc from "fast-check";
import { expect, test } from "vitest";
import type { Plant } from "../../src/compile/plant.js";
import { type Complex, complex } from "../../src/numerics/complex.js";
import { moments } from "../../src/simulate/moments.js";
import { transferFunction } from "../../src/transfer/transfer-function.js";
import { plantOf } from "../simulate/plants.js";
import { randomBlocks } from "./random-blocks.js";
import { vessel } from "./vessel.js";

const seeds = fc.integer({ min: 1, max: 1e6 });
const runs = { numRuns: 60, seed: 20261203 };
const outletMoments = (plant: Plant, from = "feed") => {
  const all = moments(plant, plant.entry.get(from) as number);
  return plant.outlets.map((o) => all[o.node]);
};

test("closed networks of all kinds: all tracer leaves, after active volume over flow", () => {
  fc.assert(
    fc.property(seeds, (seed) => {
      const plant = plantOf(randomBlocks(seed));
      const at = outletMoments(plant).filter((m) => m.share > 0);
      const share = at.reduce((sum, m) => sum + m.share, 0);
      const mean = at.reduce((sum, m) => sum + m.share * m.mean, 0);
      expect(Math.abs(share - 1)).toBeLessThan(1e-12);
      expect(Math.abs((mean * plant.feeds[0].flow) / plant.volume.active - 1)).toBeLessThan(1e-12);
    }),
    runs,
  );
});

test("moments are the derivatives of the transfer function at 0 (Cauchy's integral)", () => {
  fc.assert(
    fc.property(seeds, (seed) => {
      const plant = plantOf(randomBlocks(seed));
      const wanted = outletMoments(plant);
      const n = 32;
      // well inside the nearest singularity: that of the slowest pockets or of the slowest way through
      const passages = moments(plant, 0).map((m) => Math.sqrt(m.variance || 0) + (m.mean || 0));
      const pockets = plant.nodes.map(({ block }) =>
        block?.pockets ? block.pockets.volume / block.pockets.exchange : 0,
      );
      const slowest = Math.max(...passages, ...pockets);
      const radius = 0.2 / slowest;
      const circle = Array.from({ length: n }, (_, k): Complex => {
        const angle = (2 * Math.PI * k) / n;
        return { re: radius * Math.cos(angle), im: radius * Math.sin(angle) };
      });
      const values = transferFunction(plant, circle);
      plant.outlets.forEach(({ name }, o) => {
        const { share, mean, variance } = wanted[o];
        if (share < 1e-3) return;
        const coefficient = (order: number) =>
          values[name].reduce((sum, g, k) => {
            const angle = (2 * Math.PI * k * order) / n;
            return sum + (g.re * Math.cos(angle) + g.im * Math.sin(angle)) / n;
          }, 0) /
          radius ** order;
        const second = variance + mean ** 2;
        expect(coefficient(0)).toBeCloseTo(share, 9);
        expect(Math.abs(coefficient(1) + share * mean)).toBeLessThan(1e-8 / radius);
        expect(Math.abs(2 * coefficient(2) - share * second)).toBeLessThan(1e-7 / radius ** 2);
      });
    }),
    runs,
  );
});

test("no outlet answers louder than at s = 0 in the right half plane; conjugate points conjugate", () => {
  fc.assert(
    fc.property(
      seeds,
      fc.double({ min: 0, max: 5, noNaN: true }),
      fc.double({ min: -5, max: 5, noNaN: true }),
      (seed, x, y) => {
        const plant = plantOf(randomBlocks(seed, true));
        const time = plant.volume.active / plant.feeds[0].flow || 1;
        const s = { re: x / time, im: y / time };
        const values = transferFunction(plant, [s, { re: s.re, im: -s.im }]);
        const shares = transferFunction(plant, 0);
        for (const { name } of plant.outlets) {
          const [a, b] = values[name];
          expect(complex.size(a)).toBeLessThan(shares[name] + 1e-12);
          expect(a.re).toBeCloseTo(b.re, 12);
          expect(a.im).toBeCloseTo(-b.im, 12);
        }
      },
    ),
    runs,
  );
});

test("a laminar tube makes the variance infinite of what it reaches, and of nothing else", () => {
  const plant = plantOf(
    `network: Beside and behind
format: 1
feeds: {feed: {flow: 10 L/min, to: {a: rest, tube: 20 %}}}
compartments:
  a: {kind: stirred, volume: 10 L, to: {b: rest, side: 30 %}}
  tube: {kind: laminar, volume: 5 L, to: b}
  b: {kind: stirred, volume: 5 L, to: out}
outlets: [out, side]
`,
  );
  const [out, side] = outletMoments(plant);
  expect(out.variance).toBe(Number.POSITIVE_INFINITY);
  expect(out.skewness).toBeUndefined();
  const [q, qa] = [10 / 6e4, 8 / 6e4];
  const [toA, toTube] = [0.01 / qa, 0.005 / (0.2 * q)];
  const behind = 0.005 / (q * (0.2 + 0.8 * 0.7));
  expect(out.mean).toBeCloseTo((0.8 * 0.7 * toA + 0.2 * toTube) / (0.8 * 0.7 + 0.2) + behind, 9);
  expect(side.variance).toBeCloseTo(toA ** 2, 6);
  expect(side.skewness).toBeCloseTo(2, 12);
  const past = outletMoments(plant, "a");
  expect(past[0].variance).toBeCloseTo(toA ** 2 + behind ** 2, 6);
});

test("in a recycle with a laminar tube everything behind the tube is without variance", () => {
  const plant = plantOf(
    vessel(`  a: {kind: stirred, volume: 1 L, to: b}
  b: {kind: laminar, volume: 1 L, to: {a: 50 %, out: rest}}`),
  );
  const all = moments(plant, 0);
  expect(all[plant.exit.get("a") as number].variance).toBe(Number.POSITIVE_INFINITY);
  expect(all[plant.exit.get("out") as number].mean).toBeCloseTo(120, 9);
});

test("a share of 0 into a laminar tube leaves the variance alone", () => {
  const plant = plantOf(
    vessel(`  a: {kind: stirred, volume: 1 L, to: {b: 0 %, out: rest}}
  b: {kind: laminar, volume: 1 L, to: out}`),
  );
  expect(outletMoments(plant, "in")[0].variance).toBeCloseTo(3600, 8);
  expect(plant.volume.dead).toBeCloseTo(1e-3, 15);
});

test("open ends: mean (1 + 2/Pe) V/Q, variance (2/Pe + 8/Pe^2) (V/Q)^2, in a network too", () => {
  for (const peclet of [1, 8, 300]) {
    const plant = plantOf(
      vessel(`  a: {kind: stirred, volume: 2 L, to: b}
  b: {kind: dispersed, volume: 4 L, peclet: ${peclet}, ends: open, to: out}`),
    );
    const [{ mean, variance }] = outletMoments(plant, "in");
    expect(mean / 60).toBeCloseTo(2 + 4 * (1 + 2 / peclet), 11);
    expect(variance / 3600).toBeCloseTo(4 + 16 * (2 / peclet + 8 / peclet ** 2), 9);
  }
});

// Roemer & Durbin, Ind. Eng. Chem. Fundam. 6 (1967) 120-129 (from memory): a = backflow over through-flow
test.each([
  [2, 0.5],
  [5, 0.3],
  [5, 12],
  [1000, 2],
])("variance of %i tanks with backflow ratio %f", (n, a) => {
  const plant = plantOf(vessel(`  a: {kind: stirred, repeat: ${n}, backflow: ${100 * a} %, volume: 3 L, to: out}`));
  const [{ mean, variance }] = outletMoments(plant, "in");
  expect(mean / 180).toBeCloseTo(1, 12);
  const wanted = (n * (1 + 2 * a) - 2 * a * (1 + a) * (1 - (a / (1 + a)) ** n)) / n ** 2;
  expect(variance / mean ** 2 / wanted).toBeCloseTo(1, 10);
});

test("backflow may be a flow or a share of the through-flow; none changes nothing", () => {
  const answer = (keys: string) =>
    transferFunction(
      plantOf(vessel(`  a: {kind: stirred, repeat: 4, volume: 3 L${keys}, to: {a: 50 %, out: rest}}`)),
      0.01,
    ).out;
  expect(answer(", backflow: 40 %")).toBeCloseTo(answer(", backflow: 0.8 L/min"), 14);
  expect(answer(", backflow: 0 %")).toBe(answer(""));
});

test("pockets: variance of a tube with pockets is 2 h^2 / (Q q)", () => {
  const plant = plantOf(
    vessel("  a: {kind: tubular, volume: 3 L, stagnant: {volume: 2 L, exchange: 0.25 L/min}, to: out}"),
  );
  const [{ mean, variance }] = outletMoments(plant, "in");
  expect(mean / 60).toBeCloseTo(5, 12);
  expect(variance / 3600).toBeCloseTo((2 * 2 ** 2) / 0.25, 10);
});
