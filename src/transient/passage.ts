import { smooth } from "./beyond.js";
import type { Look } from "./transient.js";

/** How what leaves a place goes from its first value to its last, SI and s. */
export interface Passage {
  readonly first: number;
  readonly last: number;
  readonly lowest: { readonly value: number; readonly at: number };
  readonly highest: { readonly value: number; readonly at: number };
  /**
   * When it has first gone from where it begins by 1 % of the way from first to last, and since when it is within 1 % of that way
   * of where it ends; undefined where it comes back to where it was.
   */
  readonly t1: number | undefined;
  readonly t99: number | undefined;
}

const parts = 16;
/** Less than this part of all that it moves through is no way from one value to another. */
const leastWay = 0.02;

/** Looks at one component of what leaves a place, from 0 to `until`. */
export function passageOf(look: Look, species: number, component: number, until: number): Passage {
  const row = new Float64Array(species);
  const at = (t: number, side: number): number => {
    look.at(t, row, side);
    return row[component];
  };
  const first = at(0, 1);
  const last = at(until, -1);
  const seen: [number, number][] = [];
  for (const { from, to } of smooth(look, until)) {
    for (let k = 0; k <= parts; k++) {
      const t = k === parts ? to : from + ((to - from) * k) / parts;
      seen.push([t, at(t, k === parts ? -1 : 1)]);
    }
  }
  const size = seen.reduce((most, [, value]) => Math.max(most, Math.abs(value)), 0);
  // What differs by rounding of the integration is as high as what came before it.
  const extreme = (sign: number): Passage["lowest"] => {
    const best = seen.reduce((a, b) => (sign * (b[1] - a[1]) > 1e-7 * size ? b : a), [0, first]);
    return { at: best[0], value: best[1] };
  };
  const [lowest, highest] = [extreme(-1), extreme(1)];
  const way = last - first;
  if (!(Math.abs(way) > 1e-6 * size && Math.abs(way) > leastWay * (highest.value - lowest.value))) {
    return { first, last, lowest, highest, t1: undefined, t99: undefined };
  }
  const band = 0.01 * Math.abs(way);
  const near = (level: number) => (value: number) => Math.abs(value - level) <= band;
  /** Where it passes from one sample to the next. */
  const between = (k: number, inside: (value: number) => boolean): number => {
    let [low, high] = [seen[k][0], seen[k + 1][0]];
    const before = inside(seen[k][1]);
    for (let i = 0; i < 60 && high - low > 1e-15 * high; i++) {
      const middle = (low + high) / 2;
      if (inside(at(middle, 1)) === before) low = middle;
      else high = middle;
    }
    return high;
  };
  const [nearFirst, nearLast] = [near(first), near(last)];
  const left = seen.findIndex(([, value]) => !nearFirst(value));
  const late = seen.findLastIndex(([, value]) => !nearLast(value));
  const t1 = left <= 0 ? 0 : between(left - 1, nearFirst);
  const t99 = late < 0 ? 0 : late === seen.length - 1 ? until : between(late, nearLast);
  return { first, last, lowest, highest, t1, t99 };
}

/** When something that comes back is last more than 1 % of its height away from where it was, s; 0 where it does not move. */
export function backAt(look: Look, size: number, component: number, until: number): number {
  const row = new Float64Array(size);
  look.at(0, row, -1);
  const before = row[component];
  const seen = smooth(look, until).flatMap(({ from, to }) =>
    Array.from({ length: parts + 1 }, (_, k): [number, number] => {
      const t = k === parts ? to : from + ((to - from) * k) / parts;
      look.at(t, row, k === parts ? -1 : 1);
      return [t, Math.abs(row[component] - before)];
    }),
  );
  const height = seen.reduce((most, [, away]) => Math.max(most, away), 0);
  if (!(height > 1e-6 * Math.abs(before))) return 0;
  const late = seen.findLastIndex(([, away]) => away > 0.01 * height);
  // Where it passes lies between two samples, which may be far from each other.
  let [low, high] = [seen[late][0], seen[Math.min(late + 1, seen.length - 1)][0]];
  for (let i = 0; i < 60 && high - low > 1e-12 * high; i++) {
    const middle = (low + high) / 2;
    look.at(middle, row, 1);
    if (Math.abs(row[component] - before) > 0.01 * height) low = middle;
    else high = middle;
  }
  return high;
}
