import type { Aim } from "../model/aim.js";
import { type Looked, stretches, withPeak } from "../numerics/crossings.js";
import { quantile } from "./spread.js";
import { spaced } from "./sweep.js";

/** Points over each stretch in which the middle values meet the aim, where draws are looked at. */
const looksOverDraws = 5;

/** The grid with a peak that it steps over, and of `=` a trough as well. */
export function looked(f: (x: number) => number, grid: readonly Looked[], sign: Aim["sign"]): Looked[] {
  const tolerance = 1e-6;
  const up = withPeak(f, grid, tolerance);
  if (sign !== "=") return up;
  const turned = up.map(({ x, value }) => ({ x, value: -value }));
  return withPeak((x) => -f(x), turned, tolerance).map(({ x, value }) => ({ x, value: -value }));
}

/**
 * Looks again, over the draws, where the middle values meet the aim, one point of the grid further on both sides; nowhere else
 * do nine in ten draws meet it. Where none does, at the best point alone.
 */
export function overStretches(first: readonly Looked[], f: (x: number) => number): Looked[] {
  const met = stretches(first, [], (v) => v >= 0);
  if (met.length === 0) {
    const whole = first.filter((p) => !Number.isNaN(p.value));
    const best = whole.reduce<Looked | undefined>((a, b) => (!a || b.value > a.value ? b : a), undefined);
    return best ? [{ x: best.x, value: f(best.x) }] : [];
  }
  const places = met.flatMap(({ from, to }) => {
    const [before, after] = [first.findIndex((p) => p.x === from) - 1, first.findIndex((p) => p.x === to) + 1];
    return [
      ...(first[before] ? [first[before].x] : []),
      ...(from === to ? [from] : spaced(from, to, looksOverDraws, false)),
      ...(first[after] ? [first[after].x] : []),
    ];
  });
  return [...new Set(places)].sort((a, b) => a - b).map((x) => ({ x, value: f(x) }));
}

/** What a share of the draws keeps: at least, or with `<=` at most. NaN where a tenth of the draws or more give no figure. */
export function keptBy(drawn: readonly number[], confidence: number, sign: ">=" | "<="): number {
  const sorted = drawn.filter((v) => !Number.isNaN(v)).sort((a, b) => a - b);
  if (sorted.length < 0.9 * drawn.length || sorted.length < fewestDraws) return Number.NaN;
  return quantile(sorted, sign === "<=" ? confidence : 1 - confidence);
}

const fewestDraws = 20;

/** Infinite values too are then numbers, from -1 to 1. */
export const squashed = (x: number, scale: number): number =>
  Number.isFinite(x) ? x / (Math.abs(x) + scale) : Number.isNaN(x) ? x : Math.sign(x);

/** Standard error of a share of draws, by the rule that adds two draws of each sort (A. Agresti, B.A. Coull, Am. Stat. 52 (1998) 119-126, from memory). */
export function standardError(meeting: number, draws: number): number {
  const share = (meeting + 2) / (draws + 4);
  return Math.sqrt((share * (1 - share)) / (draws + 4));
}

/**
 * A zero on the side of it where f is not below 0, where f jumps over 0 there: next to a jump it is met on one side alone.
 * @param near how far to step aside
 * @returns `over`: f jumps, so that it is nowhere 0 there
 */
export function asideOf(
  f: (x: number) => number,
  zero: number,
  points: readonly Looked[],
  near: number,
): { readonly x: number; readonly over: boolean } {
  const k = points.findIndex((p) => p.x >= zero);
  const [before, after] = [points[Math.max(0, k - 1)], points[Math.max(0, k)]];
  const [low, high] = [Math.max(before.x, zero - near), Math.min(after.x, zero + near)];
  const [a, b] = [f(low), f(high)];
  const over = a * b < 0 && Math.abs(b - a) > 0.2 * Math.abs(after.value - before.value);
  if (over) return { x: a >= 0 ? low : high, over };
  // Brent's method ends on either side, by rounding.
  return { x: zero, over };
}
