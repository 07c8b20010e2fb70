import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { type MixingBounds, mixingBounds, positionBetween } from "../../src/reaction/bounds.js";
import { conditionsOf } from "../../src/reaction/conditions.js";
import { type ExitAge, exitAge, exitAgeOfTable } from "../../src/reaction/exit-age.js";
import { steadyState } from "../../src/reaction/steady.js";
import { chemistryOf, decay, dutyOf, left, plantOf, power } from "./make.js";
import { sketches } from "./networks.js";

const tanks = (n: number, tau: number) => (t: number) => {
  let e = n / tau;
  for (let k = 1; k < n; k++) e *= ((n / tau) * t) / k;
  return e * Math.exp((-n * t) / tau);
};

/** A tank of volume 1 - phi that exchanges q with a pocket of volume phi, flow 1 per tau: closed form by its two rates. */
function stagnant(phi: number, q: number, tau: number): (t: number) => number {
  const [main, pocket] = [(1 - phi) * tau, phi * tau];
  const [a, b, c] = [(1 + q) / main, q / pocket, (q * q) / (main * pocket)];
  const root = Math.sqrt((a - b) ** 2 + 4 * c);
  const [fast, slow] = [(a + b + root) / 2, (a + b - root) / 2];
  return (t) => ((fast - b) * Math.exp(-fast * t) + (b - slow) * Math.exp(-slow * t)) / (main * (fast - slow));
}

const smooth = (e: (t: number) => number, end: number): ExitAge => exitAge({ density: (t) => t.map(e), end });

const curves: Readonly<Record<string, { exit: () => ExitAge; mean: number }>> = {
  "tanks-N1-tau5": { exit: () => smooth(tanks(1, 5), 150), mean: 5 },
  "tanks-N2-tau10": { exit: () => smooth(tanks(2, 10), 170), mean: 10 },
  "tanks-N5-tau10": { exit: () => smooth(tanks(5, 10), 90), mean: 10 },
  "two-tanks-parallel-0.4-2-12": {
    exit: () => smooth((t) => 0.2 * Math.exp(-t / 2) + 0.05 * Math.exp(-t / 12), 330),
    mean: 8,
  },
  "stagnant-phi0.3-q0.5-tau12.0": { exit: () => smooth(stagnant(0.3, 0.5, 12), 500), mean: 12 },
};

/** Bounds for A of the given order, fed at 1. */
function boundsOf(exit: ExitAge, k: number, order: number): MixingBounds {
  const chemistry = decay(k, order);
  const plant = plantOf({ links: [["feed", "out", 1]] });
  const found = mixingBounds(plant, conditionsOf(plant, chemistry, dutyOf(chemistry, { feed: { A: 1 } })), exit);
  if (!found) throw new Error("no bounds");
  return found;
}

describe("published and computed bounds", () => {
  const rows = readFileSync("shared/reference/closed-forms/micromixing.csv", "utf8")
    .trim()
    .split("\n")
    .slice(1)
    .map((line) => {
      const [order, da, mixed, segregated] = line
        .slice(line.lastIndexOf('"') + 2)
        .split(",")
        .map(Number);
      return { name: line.slice(0, line.indexOf(",")), order, da, mixed, segregated };
    });

  test.each(rows)("$name, order $order, k C0^(n-1) tm $da", ({ name, order, da, mixed, segregated }) => {
    const { exit, mean } = curves[name];
    const found = boundsOf(exit(), da / mean, order);
    expect(Math.abs(1 - found.segregated[0] - segregated)).toBeLessThan(1e-9);
    expect(Math.abs(1 - found.maximumMixedness[0] - mixed)).toBeLessThan(1e-9);
    expect(found.premises).toMatchObject({ bound: "yes", rate: order > 1 ? "convex" : "concave" });
  });
});

describe("laws", () => {
  test("a tube alone: one spike, both bounds are the batch", () => {
    const found = boundsOf(exitAge({ density: (t) => t.map(() => 0), spikes: [{ time: 3, area: 1 }], end: 3 }), 0.7, 2);
    expect(found.segregated[0]).toBeCloseTo(1 / 3.1, 11);
    expect(found.maximumMixedness[0]).toBeCloseTo(1 / 3.1, 11);
  });

  test("two tubes side by side: Zwietering mixes them where the life still to come is equal", () => {
    const spikes = [
      { time: 1, area: 0.3 },
      { time: 4, area: 0.7 },
    ];
    const found = boundsOf(exitAge({ density: (t) => t.map(() => 0), spikes, end: 4 }), 0.5, 2);
    const batch = (c: number, t: number): number => c / (1 + 0.5 * c * t);
    expect(found.segregated[0]).toBeCloseTo(0.3 * batch(1, 1) + 0.7 * batch(1, 4), 11);
    expect(found.maximumMixedness[0]).toBeCloseTo(batch(0.7 * batch(1, 3) + 0.3, 1), 11);
  });

  test("maximum mixedness of a bypassed tank is that tank with the bypass at its outlet", () => {
    const exit = exitAge({
      density: (t) => t.map((x) => (0.8 * Math.exp(-x / 9)) / 9),
      spikes: [{ time: 0, area: 0.2 }],
      end: 300,
    });
    const c = (-1 + Math.sqrt(1 + 4 * 9 * 0.4)) / (2 * 9 * 0.4);
    expect(Math.abs(boundsOf(exit, 0.4, 2).maximumMixedness[0] - (0.8 * c + 0.2))).toBeLessThan(1e-11);
  });

  test("a delay before a tank: the fluid is a batch last of all", () => {
    const delay = 2;
    const exit = exitAge({
      density: (t) => t.map((x) => (x >= delay ? Math.exp(-(x - delay) / 5) / 5 : 0)),
      breaks: [delay],
      end: 160,
    });
    const tank = (-1 + Math.sqrt(1 + 4 * 5 * 0.6)) / (2 * 5 * 0.6);
    expect(Math.abs(boundsOf(exit, 0.6, 2).maximumMixedness[0] - tank / (1 + 0.6 * tank * delay))).toBeLessThan(1e-10);
  });

  test("first order: both are the transform of E at k, and there is no position between them", () => {
    const { exit } = curves["stagnant-phi0.3-q0.5-tau12.0"];
    const found = boundsOf(exit(), 0.1, 1);
    expect(Math.abs(found.segregated[0] - (1 - 0.51202905129369))).toBeLessThan(1e-11);
    expect(Math.abs(found.maximumMixedness[0] - found.segregated[0])).toBeLessThan(1e-10);
    expect(found.premises.rate).toBe("linear");
    expect(positionBetween(found.segregated[0], 0.5, found.maximumMixedness[0])).toBeUndefined();
  });

  test.each([
    ["stagnant-phi0.3-q0.5-tau12", "stagnant-phi0.3-q0.5-tau12.0", 2],
    ["tanks-N5-tau10", "tanks-N5-tau10", 2],
    ["tanks-N5-tau10", "tanks-N5-tau10", 0.5],
  ])("the network %s lies between the bounds of its curve %s, order %d", (network, curve, order) => {
    const chemistry = decay(0.09, order);
    const found = boundsOf(curves[curve].exit(), 0.09, order);
    const s = steadyState(plantOf(sketches[network]), chemistry, dutyOf(chemistry, { feed: { A: 1 } }));
    const x = left(s.fed, s.left);
    const at = positionBetween(1 - found.segregated[0], x, 1 - found.maximumMixedness[0]);
    expect(at).toBeGreaterThan(0);
    expect(at).toBeLessThanOrEqual(1 + 1e-9);
  });

  test("a table comes near the function it was taken from, and keeps its tail", () => {
    const time = Float64Array.from({ length: 601 }, (_, i) => i / 30);
    const exit = exitAgeOfTable(time, time.map(tanks(1, 5)), [], 1 / 5);
    expect(Math.abs(exit.area - 1)).toBeLessThan(1e-4);
    const found = boundsOf(exit, 1, 2);
    expect(Math.abs(1 - found.segregated[0] - 0.70133025061355)).toBeLessThan(1e-4);
    expect(Math.abs(1 - found.maximumMixedness[0] - 0.64174243050442)).toBeLessThan(1e-4);
  });
});

describe("premises", () => {
  const exit = smooth(tanks(1, 5), 150);
  const laws = [power(3, [1, 1, 0], [-1, -1, 1])];
  const chemistry = chemistryOf(["A", "B", "P"], { k: 1 }, laws);

  test("feeds that differ are said not to be bounded", () => {
    const plant = plantOf({
      links: [
        ["feed", "out", 1],
        ["feed2", "out", 1],
      ],
    });
    const duty = dutyOf(chemistry, { feed: { A: 1 }, feed2: { B: 1 } });
    expect(mixingBounds(plant, conditionsOf(plant, chemistry, duty), exit)?.premises.bound).toBe("no");
  });

  test("one reaction of several species is checked along its path", () => {
    const plant = plantOf({ links: [["feed", "out", 1]] });
    const duty = dutyOf(chemistry, { feed: { A: 1, B: 2 } });
    expect(mixingBounds(plant, conditionsOf(plant, chemistry, duty), exit)?.premises.rate).toBe("convex");
  });

  test("an autocatalytic rate bends both ways", () => {
    const auto = chemistryOf(["A", "B"], { k: 1 }, [power(2, [1, 1], [-1, 1])]);
    const plant = plantOf({ links: [["feed", "out", 1]] });
    const duty = dutyOf(auto, { feed: { A: 1, B: 0.01 } });
    // r = k a (1.01 - a) bends one way only: concave, with its maximum inside.
    expect(mixingBounds(plant, conditionsOf(plant, auto, duty), exit)?.premises.rate).toBe("concave");
    const second = chemistryOf(["A", "B"], { k: 1 }, [power(2, [2, 1], [-1, 1])]);
    const other = dutyOf(second, { feed: { A: 1, B: 0.01 } });
    expect(mixingBounds(plant, conditionsOf(plant, second, other), exit)?.premises).toMatchObject({
      bound: "no",
      rate: "mixed",
    });
  });

  test("several reactions are not checked, and no bound is claimed", () => {
    const both = chemistryOf(["A", "B", "P"], { k1: 1, k2: 0.5 }, [
      power(3, [1, 1, 0], [-1, -1, 1]),
      power(4, [0, 1, 1], [0, -1, -1]),
    ]);
    const plant = plantOf({ links: [["feed", "out", 1]] });
    const duty = dutyOf(both, { feed: { A: 1, B: 1 } });
    expect(mixingBounds(plant, conditionsOf(plant, both, duty), exit)?.premises.bound).toBe("not checked");
  });

  test("zero order has no bounds here, and none are made up", () => {
    const zero = decay(0.1, 0);
    const plant = plantOf({ links: [["feed", "out", 1]] });
    expect(mixingBounds(plant, conditionsOf(plant, zero, dutyOf(zero, { feed: { A: 1 } })), exit)).toBeUndefined();
  });
});
