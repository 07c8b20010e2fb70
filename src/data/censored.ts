import type { Reading } from "../model/trial.js";

/** Points of a curve beyond the limits of their detector, and what was put in their place. */
export interface Censored {
  readonly below: number;
  readonly above: number;
  /** Points after the last one above the lower limit, which were left out: the tail is extrapolated from there. */
  readonly cut: number;
}

/** A curve with its censored points replaced, and what that leaves open. */
export interface Uncensored {
  readonly kept: readonly number[];
  readonly value: Float64Array;
  /** Of the points kept: half the width of where they may lie, as one standard deviation of an even spread. */
  readonly doubt: Float64Array;
  readonly censored: Censored;
}

/**
 * What moments make of readings beyond the limits. Below the lower one: those before the first believed reading count as
 * nothing, those between believed ones as half the limit, those after the last are left out, so that the tail is
 * extrapolated and not drawn along the limit. Above the upper one the limit itself stands, which is too little.
 */
export function uncensor(
  value: Float64Array,
  flags: Int8Array,
  { below = 0 }: Reading["limits"],
  isPulse: boolean,
): Uncensored {
  const believed = (i: number): boolean => flags[i] >= 0;
  const n = value.length;
  let first = 0;
  while (first < n && !believed(first)) first++;
  let last = n - 1;
  while (last >= 0 && !believed(last)) last--;
  const kept = Array.from({ length: isPulse && last >= 0 ? last + 1 : n }, (_, i) => i);
  const doubt = new Float64Array(kept.length);
  const changed = Float64Array.from(kept, (i) => {
    if (believed(i)) return value[i];
    if (i < first) return 0;
    doubt[i] = below / Math.sqrt(12);
    return below / 2;
  });
  return {
    kept,
    value: changed,
    doubt,
    censored: {
      below: flags.reduce((sum, f) => sum + (f < 0 ? 1 : 0), 0),
      above: flags.reduce((sum, f) => sum + (f > 0 ? 1 : 0), 0),
      cut: n - kept.length,
    },
  };
}
