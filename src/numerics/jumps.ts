/** Where a function jumps: the places on both sides of it, and its values there. */
export interface Jump {
  readonly below: number;
  readonly above: number;
  readonly before: number;
  readonly after: number;
}

/** Halvings of an interval, and what must be left of its rise: a curve that is only steep keeps less. */
const halvings = 24;
const left = 0.3;

/**
 * Where a function jumps between two places, by halving the interval and going on with the half in which it changes more.
 * @param f NaN where it has no value
 * @returns undefined where it does not jump: the change thins out as the interval does
 */
export function jumpBetween(f: (x: number) => number, a: number, b: number): Jump | undefined {
  let [below, above] = [a, b];
  let [before, after] = [f(a), f(b)];
  const rise = Math.abs(after - before);
  if (!(rise > 0)) return undefined;
  const infinite = !Number.isFinite(rise);
  for (let k = 0; k < halvings; k++) {
    const middle = (below + above) / 2;
    const value = f(middle);
    if (Number.isNaN(value)) return undefined;
    const [low, high] = [change(before, value), change(value, after)];
    if (low >= high) [above, after] = [middle, value];
    else [below, before] = [middle, value];
    if (!infinite && Math.max(low, high) < left * rise) return undefined;
  }
  return { below, above, before, after };
}

/** Two infinite values of one sign do not differ. */
const change = (a: number, b: number): number => (a === b ? 0 : Math.abs(b - a));

/**
 * Intervals of a sampled curve in which it may jump, by their first point: it changes there by more than twice what it does
 * beside it. Of two points alone nothing is known.
 */
export function suspects(values: readonly number[]): number[] {
  const steps = values.slice(1).map((v, k) => change(values[k], v));
  const largest = steps.reduce((m, s) => (Number.isFinite(s) ? Math.max(m, s) : m), 0);
  return steps.flatMap((step, k) => {
    const beside = [steps[k - 1], steps[k + 1]].filter((s) => s !== undefined && !Number.isNaN(s));
    return step > 1e-6 * largest && beside.every((s) => step > 2 * s) ? [k] : [];
  });
}
