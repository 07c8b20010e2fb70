import { describe, expect, test } from "vitest";
import { passageOf } from "../../src/transient/passage.js";
import type { Look } from "../../src/transient/transient.js";

/** One component, smooth all the way. */
const lookOf = (f: (t: number) => number): Look => ({
  at: (t, out) => {
    out[0] = f(t);
  },
  integral: () => undefined,
  flow: () => Number.NaN,
  volume: () => Number.NaN,
  left: () => undefined,
  stretch: (t) => t + 1,
});

describe("how a course goes from its first value to its last", () => {
  test("what rises and settles: exp by closed form", () => {
    const { t1, t99 } = passageOf(
      lookOf((t) => -Math.expm1(-t)),
      1,
      0,
      60,
    );
    expect(t1).toBeCloseTo(-Math.log(0.99), 8);
    expect(t99).toBeCloseTo(Math.log(100), 8);
  });

  test("what swings through its end is done only once it stays within 1 % of it", () => {
    const swing = (t: number): number => 1 - Math.exp(-t / 10) * Math.cos(t);
    const { t1, t99, highest } = passageOf(lookOf(swing), 1, 0, 200);
    expect(highest.value).toBeGreaterThan(1.7);
    for (let t = t99 ?? 0; t < 200; t += 0.01) expect(Math.abs(swing(t + 1e-6) - 1)).toBeLessThan(0.01);
    expect(Math.abs(swing((t99 ?? 0) - 1e-3) - 1)).toBeGreaterThan(0.01);
    expect(swing(t1 ?? 1)).toBeCloseTo(0.01, 6);
  });

  test("what rises first and ends lower has begun when it rises", () => {
    const detour = (t: number): number => 1 + 5 * t * Math.exp(-t) - 0.5 * -Math.expm1(-t / 5);
    const { t1 } = passageOf(lookOf(detour), 1, 0, 100);
    expect(t1).toBeLessThan(0.01);
  });
});
