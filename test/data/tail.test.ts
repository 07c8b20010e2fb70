import { describe, expect, test } from "vitest";
import { noiseOf } from "../../src/data/noise.js";
import { tailOf } from "../../src/data/tail.js";
import { random } from "../../src/numerics/random.js";
import { twoZones } from "./helpers.js";

/** How often a curve with seeded noise (share of the peak) is called what. */
function called(c: (t: number) => number, from: number, until: number, points: number, noise: number): string[] {
  const t = Float64Array.from({ length: points }, (_, i) => from + ((until - from) * i) / (points - 1));
  const clean = t.map(c);
  const sd = noise * clean.reduce((most, y) => Math.max(most, y), 0);
  const seeds = noise === 0 ? 1 : 25;
  return Array.from({ length: seeds }, (_, seed) => {
    const { normal } = random(seed + 1);
    const y = clean.map((v) => v + sd * normal());
    return tailOf(t, y, noise === 0 ? noiseOf(t, y, 0, undefined).sd : t.map(() => sd)).is;
  });
}

describe("two exponentials are no power law", () => {
  test.each([
    ["tank 6.5 L, quiet 3.5 L, exchange 0.25, at 2 L/min", twoZones(6.5, 3.5, 0.25, 2)],
    ["tank 5 L, quiet 5 L, exchange 0.1, at 2 L/min", twoZones(5, 5, 0.1, 2)],
    ["tank 8 L, quiet 2 L, exchange 0.02, at 1 L/min", twoZones(8, 2, 0.02, 1)],
    ["tank 9 L, quiet 1 L, exchange 1, at 2 L/min", twoZones(9, 1, 1, 2)],
  ])("%s: no false alarm, cut at 30 and 60, first seen at 0 and 0.5, without and with noise", (_, c) => {
    const kinds = [0, 0.001, 0.003, 0.01].flatMap((noise) => [
      ...called(c, 0, 30, 301, noise),
      ...called(c, 0, 60, 601, noise),
      ...called(c, 0.5, 60, 120, noise),
    ]);
    expect(kinds.length).toBe(3 + 9 * 25);
    expect(kinds.filter((kind) => kind === "power")).toEqual([]);
  });
});

describe("a power law is called one where it stands out of the noise for more than a decade", () => {
  test.each([
    [1.5, 0.001, 0.5],
    [1.8, 0.001, 0.7],
    [1.5, 0.003, 0.6],
    [1.8, 0, 1],
  ])("t^-%f with noise of %f of the peak: at least %f of the time", (power, noise, share) => {
    const c = (t: number) => (t < 0.2 ? 5 * t : (t / 0.2) ** -power);
    const kinds = called(c, 0, 20, 1001, noise);
    expect(kinds.filter((kind) => kind === "power").length / kinds.length).toBeGreaterThanOrEqual(share);
  });

  test("one that begins softly", () => {
    const kinds = called((t) => t ** 2 / (1 + t ** 3.5), 0, 40, 1001, 0.003);
    expect(kinds.filter((kind) => kind === "power").length / kinds.length).toBeGreaterThanOrEqual(0.9);
  });
});
