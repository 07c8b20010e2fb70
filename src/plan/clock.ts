import { type Passage, timeOf } from "./passage.js";

/** Points before the injection: the baseline. */
const before = 10;

/**
 * When to sample, s since the injection: ten points before it, ten from the first tracer over the peak, then ever sparser
 * to the end (common practice). Rounded to what a clock in the field can follow.
 * @param peak  when most tracer comes, s
 * @param count samples after the injection
 */
export function sampleClock(passage: Passage, peak: number, stop: number, count: number): Float64Array {
  const first = Math.min(timeOf(passage, 0.001), 0.9 * stop);
  const top = Math.max(peak, first + stop / 200);
  const rise = Math.min(10, Math.max(3, Math.round(count / 3)));
  const step = (top - first) / rise;
  const quantum = roundStep(step / 2);
  const times = new Set<number>();
  const add = (t: number): void => {
    const rounded = Math.round(t / quantum) * quantum;
    if (rounded > 0) times.add(Number(rounded.toPrecision(12)));
  };
  for (let i = 0; i <= rise; i++) add(first + i * step);
  const rest = Math.max(2, count - times.size);
  const growth = growthFor(step, stop - top, rest);
  let [t, h] = [top, step];
  for (let i = 0; i < rest; i++) {
    t = i === rest - 1 ? stop : t + h;
    h *= growth;
    add(Math.min(t, stop));
  }
  const early = Array.from({ length: before }, (_, i) => (i - before) * Math.max(quantum, roundStep(step)));
  return Float64Array.from([...early, ...[...times].sort((a, b) => a - b)]);
}

/** Even steps, as a logger takes them. */
export const evenClock = (every: number, stop: number): Float64Array =>
  Float64Array.from({ length: before + Math.max(3, Math.ceil(stop / every)) + 1 }, (_, i) => (i - before) * every);

/** The factor by which steps grow so that n of them, the first of length h, fill a span. */
function growthFor(h: number, span: number, n: number): number {
  const length = (g: number): number => (Math.abs(g - 1) < 1e-9 ? n * h : (h * (g ** n - 1)) / (g - 1));
  let [low, high] = [1, 10];
  if (length(low) >= span) return 1;
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2;
    if (length(middle) < span) low = middle;
    else high = middle;
  }
  return high;
}

/** 1, 2, 5, 10, 15, 20, 30 s, then minutes and hours alike: the longest that is no longer. */
export function roundStep(seconds: number): number {
  const steps = [1, 2, 5, 10, 15, 20, 30].flatMap((s) => [s, 60 * s, 3600 * s]).sort((a, b) => a - b);
  const below = steps.filter((s) => s <= seconds);
  if (below.length > 0) return below[below.length - 1];
  const decade = 10 ** Math.floor(Math.log10(seconds));
  return [5, 2, 1].map((m) => m * decade).find((s) => s <= seconds) ?? decade;
}
