import { expect, test } from "vitest";
import { lowDiscrepancy } from "../../src/numerics/low-discrepancy.js";
import { random } from "../../src/numerics/random.js";

test("the same seed gives the same points, another seed others", () => {
  expect(lowDiscrepancy(4, 9)()).toEqual(lowDiscrepancy(4, 9)());
  expect(lowDiscrepancy(4, 9)()).not.toEqual(lowDiscrepancy(4, 10)());
});

test("points lie inside the open cube, fresh each time, up to 40 dimensions", () => {
  const next = lowDiscrepancy(40, 1);
  const first = next();
  for (let k = 0; k < 500; k++) for (const x of next()) expect(x > 0 && x < 1).toBe(true);
  expect(next()).not.toBe(first);
  expect(() => lowDiscrepancy(41, 1)).toThrow(RangeError);
});

test("every coordinate takes every interval of its base equally often", () => {
  const next = lowDiscrepancy(3, 4);
  const points = Array.from({ length: 900 }, next);
  for (let j = 0; j < 3; j++) {
    const counts = new Int32Array(10);
    for (const p of points) counts[Math.floor(p[j] * 10)]++;
    for (const c of counts) expect(Math.abs(c - 90)).toBeLessThanOrEqual(4);
  }
});

test("fills pairs of late dimensions far better than chance", () => {
  // star-like discrepancy on anchored boxes of a 12 x 12 grid
  const unevenness = (points: readonly (readonly [number, number])[]): number => {
    let worst = 0;
    for (let a = 1; a <= 12; a++) {
      for (let b = 1; b <= 12; b++) {
        const inside = points.filter(([x, y]) => x < a / 12 && y < b / 12).length / points.length;
        worst = Math.max(worst, Math.abs(inside - (a * b) / 144));
      }
    }
    return worst;
  };
  const n = 600;
  const r = random(2);
  const chance = unevenness(Array.from({ length: n }, () => [r.uniform(), r.uniform()] as const));
  for (const [i, j] of [
    [0, 1],
    [8, 9],
    [20, 21],
    [28, 29],
  ]) {
    const next = lowDiscrepancy(30, 6);
    const even = unevenness(
      Array.from({ length: n }, () => {
        const p = next();
        return [p[i], p[j]] as const;
      }),
    );
    expect(even).toBeLessThan(chance);
  }
});
