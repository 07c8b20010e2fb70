import { describe, expect, test } from "vitest";
import { noiseOf } from "../../src/data/noise.js";
import { tailOf } from "../../src/data/tail.js";
import { random } from "../../src/numerics/random.js";
import { twoZones, washoutOf } from "./helpers.js";

/** How often a curve with seeded noise (share of the peak) is called what. */
function called(
  c: (t: number) => number,
  from: number,
  until: number,
  points: number,
  noise: number,
  most = 25,
): string[] {
  const t = Float64Array.from({ length: points }, (_, i) => from + ((until - from) * i) / (points - 1));
  const clean = t.map(c);
  const sd = noise * clean.reduce((most, y) => Math.max(most, y), 0);
  const seeds = noise === 0 ? 1 : most;
  return Array.from({ length: seeds }, (_, seed) => {
    const { normal } = random(seed + 1);
    const y = clean.map((v) => v + sd * normal());
    return tailOf(
      t,
      y,
      noise === 0 ? noiseOf(t, y, 0, { noise: undefined, calibration: undefined }).sd : t.map(() => sd),
    ).is;
  });
}

describe("two exponentials are no power law", () => {
  const vessels = [
    ["tank 6.5 L, quiet 3.5 L, exchange 0.25, at 2 L/min", [6.5, 3.5, 0.25, 2]],
    ["tank 6.5 L, quiet 3.5 L, exchange 0.5, at 2 L/min", [6.5, 3.5, 0.5, 2]],
    ["tank 5 L, quiet 5 L, exchange 0.1, at 2 L/min", [5, 5, 0.1, 2]],
    ["tank 3 L, quiet 7 L, exchange 0.3, at 1 L/min", [3, 7, 0.3, 1]],
  ] as const;

  test.each(vessels)(
    "%s: no false alarm, pulse or wash-out, however long, first seen at 0 to 1",
    (_, [V, W, x, flow]) => {
      const pulse = twoZones(V, W, x, flow);
      const washout = washoutOf(V, W, x, flow);
      const kinds = [pulse, washout].flatMap((c) =>
        [0, 0.003].flatMap((noise) =>
          [20, 30, 60, 100].flatMap((until) => [0.1, 0.5, 1].flatMap((from) => called(c, from, until, 120, noise, 8))),
        ),
      );
      expect(kinds.length).toBe(2 * 12 * 9);
      expect(kinds.filter((kind) => kind === "power")).toEqual([]);
    },
  );
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
