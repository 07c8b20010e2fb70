import { goldenSection } from "./golden-section.js";
import { brent } from "./roots.js";

/** A value of a function; NaN where it has none. */
export interface Looked {
  readonly x: number;
  readonly value: number;
}

/** The function that never computes one value twice. */
export function remembered(f: (x: number) => number): (x: number) => number {
  const known = new Map<number, number>();
  return (x) => {
    const before = known.get(x);
    if (before !== undefined) return before;
    const value = f(x);
    known.set(x, value);
    return value;
  };
}

/**
 * Where every value is below 0, the top of the highest is looked for between its neighbours by golden section and added: a peak
 * between two points may reach what they do not. Points ascending.
 */
export function withPeak(f: (x: number) => number, points: readonly Looked[], tolerance: number): Looked[] {
  if (points.some((p) => p.value >= 0)) return [...points];
  const whole = points.filter((p) => !Number.isNaN(p.value));
  if (whole.length === 0) return [...points];
  const top = whole.reduce((a, b) => (b.value > a.value ? b : a));
  const k = points.indexOf(top);
  const [low, high] = [points[Math.max(0, k - 1)].x, points[Math.min(points.length - 1, k + 1)].x];
  const peak = goldenSection(f, low, high, tolerance);
  return peak.value > top.value ? [...points, peak].sort((a, b) => a.x - b.x) : [...points];
}

/** Zeros: points that are 0, and one between every two neighbours of different sign. Ascending. */
export function crossings(f: (x: number) => number, points: readonly Looked[], tolerance: number): number[] {
  return points.flatMap(({ x, value }, k): number[] => {
    const own = value === 0 ? [x] : [];
    const before = points[k - 1];
    if (!before || !(before.value * value < 0)) return own;
    const zero = brent(f, before.x, x, tolerance);
    return typeof zero === "number" ? [zero, ...own] : own;
  });
}

/** Runs of points that are so, their ends carried to the zeros that lie between them and their neighbours. */
export function stretches(
  points: readonly Looked[],
  zeros: readonly number[],
  so: (value: number) => boolean,
): { readonly from: number; readonly to: number }[] {
  const found: { from: number; to: number }[] = [];
  for (let k = 0; k < points.length; k++) {
    if (!so(points[k].value)) continue;
    const first = k;
    while (k + 1 < points.length && so(points[k + 1].value)) k++;
    const between = (a: number, b: number): number | undefined =>
      points[a] && points[b] && zeros.find((z) => z >= points[a].x && z <= points[b].x);
    found.push({ from: between(first - 1, first) ?? points[first].x, to: between(k, k + 1) ?? points[k].x });
  }
  return found;
}
