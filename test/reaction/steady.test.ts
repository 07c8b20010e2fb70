import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { steadyState } from "../../src/reaction/steady.js";
import { chemistryOf, decay, dutyOf, left, plantOf, power } from "./make.js";
import { sketches } from "./networks.js";

const rows = readFileSync("shared/reference/closed-forms/network-conversions.csv", "utf8")
  .trim()
  .split("\n")
  .slice(1)
  .map((line) => {
    const [order, k, conversion] = line.split(",").slice(-5).map(Number);
    return { name: line.slice(0, line.indexOf(",")), order, k, conversion };
  })
  .filter(({ name }) => name in sketches);

describe("conversion in the network itself", () => {
  test("the table has the networks that cells and tubes can make", () => expect(rows.length).toBe(21));

  test.each(rows)("$name, order $order, k $k", ({ name, order, k, conversion }) => {
    const chemistry = decay(k, order);
    const s = steadyState(plantOf(sketches[name]), chemistry, dutyOf(chemistry, { feed: { A: 1 } }));
    expect(s.converged).toBe(true);
    expect(Math.abs(left(s.fed, s.left) - conversion)).toBeLessThan(2e-13 + 1e-10 * conversion);
    expect(Math.abs(s.closure[0])).toBeLessThan(1e-11);
  });
});

/** exp(-s tau) and 1/(1 + s tau) node by node: the transfer function from feed to outlets of a sketch without loops. */
describe("laws of balances", () => {
  const ring = { cells: { a: 2, b: 5, c: 1 }, tubes: { t: 3 } };
  const links = [
    ["feed", "a", 1],
    ["a", "t", 4],
    ["t", "b", 4],
    ["b", "a", 3],
    ["b", "c", 0.4],
    ["c", "b", 0.4],
    ["b", "out", 1],
  ] as const;

  test.each([0.01, 0.3, 5])("a first-order reaction is the transfer function at s = k = %d", (k) => {
    // Mason's rule by hand for the ring: c is a side pocket of b.
    const pocket = 0.4 / (1 + 2.5 * k);
    const throughA = 1 / (4 + 2 * k);
    const throughB = 4 / (4.4 + 5 * k - pocket);
    const pass = 4 * throughA * Math.exp((-k * 3) / 4) * throughB;
    const expected = (throughA * pass) / throughA / 4 / (1 - (3 / 4) * pass);
    const chemistry = decay(k, 1);
    const s = steadyState(plantOf({ ...ring, links }), chemistry, dutyOf(chemistry, { feed: { A: 1 } }));
    expect(s.converged).toBe(true);
    expect(Math.abs(s.outlets[0].concentrations[0] / expected - 1)).toBeLessThan(1e-11);
  });

  test("without a chemistry feeds only mix", () => {
    const plant = plantOf({
      cells: { a: 2 },
      links: [
        ["feed", "a", 1],
        ["feed2", "a", 3],
        ["a", "out", 4],
      ],
    });
    const s = steadyState(plant, undefined, dutyOf(undefined, { feed: { A: 8 }, feed2: { B: 4 } }));
    expect([...s.outlets[0].concentrations]).toEqual([2, 3]);
  });

  test("a stoichiometric feed of A + B -> P keeps A = B and A + P = 1, and obeys order two", () => {
    const chemistry = chemistryOf(["A", "B", "P"], { k: 3 }, [power(3, [1, 1, 0], [-1, -1, 1])]);
    const plant = plantOf({ ...ring, links });
    const s = steadyState(plant, chemistry, dutyOf(chemistry, { feed: { A: 1, B: 1 } }));
    const one = decay(3, 2);
    const alone = steadyState(plant, one, dutyOf(one, { feed: { A: 1 } }));
    const [a, b, p] = s.outlets[0].concentrations;
    expect(Math.abs(a - b)).toBeLessThan(1e-12);
    expect(Math.abs(a + p - 1)).toBeLessThan(1e-11);
    expect(Math.abs(a - alone.outlets[0].concentrations[0])).toBeLessThan(1e-11);
    for (const gap of s.closure) expect(Math.abs(gap)).toBeLessThan(1e-11);
  });

  test("A -> P -> S in one tank and in one tube, closed forms", () => {
    const [k1, k2, tau] = [0.7, 0.3, 2];
    const chemistry = chemistryOf(["A", "P", "S"], { k1, k2 }, [
      power(3, [1, 0, 0], [-1, 1, 0]),
      power(4, [0, 1, 0], [0, -1, 1]),
    ]);
    const duty = dutyOf(chemistry, { feed: { A: 5 } });
    const tank = plantOf({
      cells: { v: tau },
      links: [
        ["feed", "v", 1],
        ["v", "out", 1],
      ],
    });
    const tube = plantOf({
      tubes: { v: tau },
      links: [
        ["feed", "v", 1],
        ["v", "out", 1],
      ],
    });
    const inTank = steadyState(tank, chemistry, duty).outlets[0].concentrations[1];
    const inTube = steadyState(tube, chemistry, duty).outlets[0].concentrations[1];
    expect(inTank).toBeCloseTo((5 * k1 * tau) / (1 + k1 * tau) / (1 + k2 * tau), 12);
    expect(inTube).toBeCloseTo(((5 * k1) / (k2 - k1)) * (Math.exp(-k1 * tau) - Math.exp(-k2 * tau)), 11);
  });

  test("results scale with the unit of concentration", () => {
    const plant = plantOf({ ...ring, links });
    const [small, large] = [1e-6, 1e9].map((c0) => {
      const chemistry = decay(0.8 / c0, 2);
      return steadyState(plant, chemistry, dutyOf(chemistry, { feed: { A: c0 } })).outlets[0].concentrations[0] / c0;
    });
    expect(Math.abs(small - large)).toBeLessThan(1e-12);
  });
});

describe("where something runs out", () => {
  const half = decay(2, 0.5);
  const zero = decay(0.25, 0);
  const tube = plantOf({
    tubes: { v: 4 },
    links: [
      ["feed", "v", 1],
      ["v", "out", 1],
    ],
  });
  const tank = plantOf({
    cells: { v: 4 },
    links: [
      ["feed", "v", 1],
      ["v", "out", 1],
    ],
  });

  test("half order in a tube longer than the reaction lasts leaves nothing", () => {
    const s = steadyState(tube, half, dutyOf(half, { feed: { A: 1 } }));
    expect(s.converged).toBe(true);
    expect(s.outlets[0].concentrations[0]).toBeLessThan(1e-12);
  });

  test.each([3, 1, 0.4])("zero order takes what there is and no more: fed %d, asked 1", (fed) => {
    const duty = dutyOf(zero, { feed: { A: fed } });
    for (const plant of [tube, tank]) {
      const s = steadyState(plant, zero, duty);
      expect(s.converged).toBe(true);
      expect(Math.abs(s.outlets[0].concentrations[0] - Math.max(fed - 1, 0))).toBeLessThan(1e-10);
      expect(Math.abs(s.closure[0])).toBeLessThan(1e-10);
    }
  });

  test.each([3, 1.7])("zero order A -> P in a tube inside a recycle, fed %d", (fed) => {
    const chemistry = chemistryOf(["A", "P"], { k: 0.6 }, [power(2, [0, 0], [-1, 1])]);
    const plant = plantOf({
      tubes: { v: 4 },
      links: [
        ["feed", "mix", 1],
        ["mix", "v", 3],
        ["v", "split", 3],
        ["split", "mix", 2],
        ["split", "out", 1],
      ],
    });
    const s = steadyState(plant, chemistry, dutyOf(chemistry, { feed: { A: fed } }));
    expect(s.converged).toBe(true);
    // One pass takes 0.6 * 4 / 3 = 0.8, so a whole turn of 3 parts takes 2.4 from 1 part of feed, or all there is.
    expect(Math.abs(s.outlets[0].concentrations[0] - Math.max(fed - 2.4, 0))).toBeLessThan(1e-9);
    expect(Math.abs(s.outlets[0].concentrations[1] - Math.min(fed, 2.4))).toBeLessThan(1e-9);
  });

  test("a species that is never fed does not disturb laws that are steep at zero", () => {
    const chemistry = chemistryOf(["A", "B"], { k: 2 }, [power(2, [0.5, 0.5], [-1, -1])]);
    const s = steadyState(tank, chemistry, dutyOf(chemistry, { feed: { A: 1 } }));
    expect(s.converged).toBe(true);
    expect([...s.outlets[0].concentrations]).toEqual([1, 0]);
  });

  test.each([1e3, 1e6, 1e9])("a tank at Damkoehler number %d of order two", (da) => {
    const chemistry = decay(da / 4, 2);
    const s = steadyState(tank, chemistry, dutyOf(chemistry, { feed: { A: 1 } }));
    const expected = 2 / (1 + Math.sqrt(1 + 4 * da));
    expect(s.converged).toBe(true);
    expect(Math.abs(s.outlets[0].concentrations[0] / expected - 1)).toBeLessThan(1e-12);
  });

  test("a node that no flow reaches has no concentration and disturbs nothing", () => {
    const plant = plantOf({
      cells: { v: 4, pocket: 1 },
      links: [
        ["feed", "v", 1],
        ["v", "pocket", 0],
        ["pocket", "v", 0],
        ["v", "out", 1],
      ],
    });
    const s = steadyState(plant, half, dutyOf(half, { feed: { A: 1 } }));
    expect(s.converged).toBe(true);
    expect(s.concentrations[plant.nodes.findIndex((n) => n.name === "pocket")]).toBeNaN();
    expect(s.outlets[0].concentrations[0]).toBeGreaterThan(0);
  });

  test("an autocatalytic reaction that has to ignite, closed form", () => {
    const chemistry = chemistryOf(["A", "B"], { k: 1 }, [power(2, [1, 1], [-1, 1])]);
    const s = steadyState(tank, chemistry, dutyOf(chemistry, { feed: { A: 1, B: 1e-6 } }));
    // b = b0 + k tau (1 + b0 - b) b, the larger root; k tau = 4.
    const [p, q] = [1 - 4 * (1 + 1e-6), -1e-6];
    expect(s.converged).toBe(true);
    expect(s.outlets[0].concentrations[1]).toBeCloseTo((-p + Math.sqrt(p * p - 16 * q)) / 8, 11);
  });
});
