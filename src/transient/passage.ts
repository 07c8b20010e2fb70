import { smooth } from "./beyond.js";
import type { Look } from "./transient.js";

/** How what leaves a place goes from its first value to its last, SI and s. */
export interface Passage {
  readonly first: number;
  readonly last: number;
  readonly lowest: { readonly value: number; readonly at: number };
  readonly highest: { readonly value: number; readonly at: number };
  /** When 1 % and 99 % of the way from first to last are done for good; undefined where it comes back to where it was. */
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
  /** The last time at which less than a share of the way was done. */
  const done = (share: number): number => {
    const ahead = (value: number): boolean => (value - first) / way >= share;
    let k = seen.length - 1;
    while (k >= 0 && ahead(seen[k][1])) k--;
    if (k < 0) return 0;
    if (k === seen.length - 1) return until;
    let [low, high] = [seen[k][0], seen[k + 1][0]];
    for (let i = 0; i < 60 && high - low > 1e-15 * high; i++) {
      const middle = (low + high) / 2;
      if (ahead(at(middle, 1))) high = middle;
      else low = middle;
    }
    return high;
  };
  return { first, last, lowest, highest, t1: done(0.01), t99: done(0.99) };
}
