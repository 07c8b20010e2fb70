import { describe, expect, test } from "vitest";
import { chiSquareCdf, normalCdf } from "../../src/numerics/distributions.js";
import { random } from "../../src/numerics/random.js";

describe("seeded random numbers", () => {
  test("the same seed gives the same numbers, another seed others", () => {
    const take = (seed: number): number[] => Array.from({ length: 5 }, random(seed).uniform);
    expect(take(1)).toEqual(take(1));
    expect(new Set([take(1), take(2), take(-1), take(2 ** 40), take(2 ** 40 + 1)].map(String)).size).toBe(5);
  });

  test("two streams do not disturb each other", () => {
    const [a, b] = [random(3), random(3)];
    a.normal();
    b.normal();
    b.uniform();
    const alone = random(3);
    alone.normal();
    expect(a.uniform()).toBe(alone.uniform());
  });

  test("uniform numbers fill [0, 1) evenly and neighbours are independent", () => {
    const r = random(11);
    const counts = new Float64Array(400);
    const n = 80_000;
    let before = r.uniform();
    for (let k = 0; k < n; k++) {
      const next = r.uniform();
      counts[Math.floor(before * 20) * 20 + Math.floor(next * 20)]++;
      before = next;
    }
    const chi = counts.reduce((s, c) => s + (c - n / 400) ** 2 / (n / 400), 0);
    const p = chiSquareCdf(chi, 399);
    expect(p).toBeGreaterThan(0.001);
    expect(p).toBeLessThan(0.999);
  });

  test("normal deviates have the normal distribution (Kolmogorov)", () => {
    const r = random(5);
    const n = 20_000;
    const z = Float64Array.from({ length: n }, () => r.normal()).sort();
    let gap = 0;
    z.forEach((v, k) => {
      gap = Math.max(gap, Math.abs(normalCdf(v) - (k + 0.5) / n) + 0.5 / n);
    });
    expect(gap * Math.sqrt(n)).toBeLessThan(1.95); // one in a thousand would lie above
  });

  test("whole numbers below n are equally likely", () => {
    const r = random(8);
    const counts = new Float64Array(7);
    for (let k = 0; k < 70_000; k++) counts[r.below(7)]++;
    const chi = counts.reduce((s, c) => s + (c - 10_000) ** 2 / 10_000, 0);
    expect(chiSquareCdf(chi, 6)).toBeLessThan(0.999);
    expect(r.below(1)).toBe(0);
  });
});
