import type { Look } from "./transient.js";

/** A stretch of time on one side of a limit, s. */
export interface Span {
  readonly from: number;
  readonly to: number;
}

/** Parts of a smooth stretch at which it is looked at. */
const parts = 16;

/**
 * Where what leaves a place is above a limit, or below it, from 0 to `until`: each crossing found to rounding.
 * @param component species
 * @param limit SI
 */
export function beyond(
  look: Look,
  species: number,
  component: number,
  limit: number,
  side: "above" | "below",
  until: number,
): Span[] {
  const row = new Float64Array(species);
  const sign = side === "above" ? 1 : -1;
  const over = (t: number, at: number): number => {
    look.at(t, row, at);
    return sign * (row[component] - limit);
  };
  const spans: { from: number; to: number }[] = [];
  const add = (from: number, to: number): void => {
    const last = spans.at(-1);
    if (last && last.to === from) last.to = to;
    else if (to > from) spans.push({ from, to });
  };
  for (const { from, to } of smooth(look, until)) {
    let [a, fa] = [from, over(from, 1)];
    for (let k = 1; k <= parts; k++) {
      const b = k === parts ? to : from + ((to - from) * k) / parts;
      const fb = over(b, k === parts ? -1 : 1);
      if (fa > 0 && fb > 0) add(a, b);
      else if (fa > 0 || fb > 0) {
        const at = crossing(over, a, b, fa > 0);
        if (fa > 0) add(a, at);
        else add(at, b);
      }
      [a, fa] = [b, fb];
    }
  }
  return spans;
}

/** The smooth stretches of what is seen, one after another. */
export function smooth(look: Look, until: number): Span[] {
  const stretches: Span[] = [];
  let from = 0;
  while (from < until && stretches.length < 1e6) {
    const next = look.stretch(from);
    const to = next > from && next < until ? next : until;
    stretches.push({ from, to });
    from = to;
  }
  return stretches;
}

/** Where a function changes sign between a and b, by halving. */
function crossing(f: (t: number, side: number) => number, a: number, b: number, falls: boolean): number {
  let [low, high] = [a, b];
  for (let k = 0; k < 60 && high - low > 1e-15 * high; k++) {
    const middle = (low + high) / 2;
    if (f(middle, 1) > 0 === falls) low = middle;
    else high = middle;
  }
  return (low + high) / 2;
}
