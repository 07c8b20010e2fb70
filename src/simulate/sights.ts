import type { Path } from "./driven-steps.js";

/** One curve of a passage, or one derivative of it. */
export interface Sight {
  /** To be added to, from `first` on. */
  readonly onto: Float64Array;
  readonly first: number;
  readonly size: number;
  /** By time; undefined for 1. */
  readonly counts: Float64Array | undefined;
  readonly n: number;
  readonly path: Path;
  /** Which block of the states `w` weighs; `v` from `from` on weighs the first, but for the curve itself. */
  readonly block: number;
  readonly w: Float64Array;
  readonly v: Float64Array;
  readonly from: number;
  /** What the rate and its slope count. */
  readonly onward: number;
  readonly turn: number;
}

export function addSeen({ onto, first, size, counts, n, path, block, w, v, from, onward, turn }: Sight): void {
  const { states, length, rate, rise } = path;
  for (let i = 0; i < size; i++) {
    const at = i * length;
    let sum = onward * rate[i] + turn * rise[i];
    for (let j = 0; j < n; j++) sum += w[j] * states[at + block * n + j];
    if (block > 0) for (let j = 0; j < n; j++) sum += v[from + j] * states[at + j];
    onto[first + i] += counts ? counts[i] * sum : sum;
  }
}

/** Of two states. */
export function addSeenOfTwo({ onto, first, size, counts, path, block, w, v, from, onward, turn }: Sight): void {
  const { states, length, rate, rise } = path;
  const w0 = w[0];
  const w1 = w[1];
  const v0 = block > 0 ? v[from] : 0;
  const v1 = block > 0 ? v[from + 1] : 0;
  const own = 2 * block;
  for (let i = 0; i < size; i++) {
    const at = i * length;
    const sum =
      onward * rate[i] +
      turn * rise[i] +
      w0 * states[at + own] +
      w1 * states[at + own + 1] +
      v0 * states[at] +
      v1 * states[at + 1];
    onto[first + i] += counts ? counts[i] * sum : sum;
  }
}

/** The same where no state is seen. */
export function addDirect({ onto, first, size, counts, path: { rate, rise }, onward, turn }: Sight): void {
  if (onward === 0 && turn === 0) return;
  for (let i = 0; i < size; i++) {
    if (rate[i] === 0 && rise[i] === 0) continue;
    const sum = onward * rate[i] + turn * rise[i];
    onto[first + i] += counts ? counts[i] * sum : sum;
  }
}
