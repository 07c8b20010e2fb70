import type { SparseRows } from "./sparse.js";

/**
 * x' = A x in which some unknowns hold nothing: the first `states` rows are rates of change; the rows after them give the
 * value of their own unknown as a sum over others, each after those that it is made of.
 */
export interface MixedRows extends SparseRows {
  readonly states: number;
}

/** Gives the unknowns that hold nothing their values; no allocation. */
export function settle({ size, states, start, column, value }: MixedRows, x: Float64Array): void {
  for (let i = states; i < size; i++) {
    let sum = 0;
    for (let e = start[i]; e < start[i + 1]; e++) sum += value[e] * x[column[e]];
    x[i] = sum;
  }
}

/** Where the rates lie: within the ellipse with half axes `half` and `height` that touches 0 from the left. 1/s. */
export interface Ellipse {
  readonly half: number;
  readonly height: number;
}

/** Rounds of the iteration for the largest rate: more would make the ellipse a few percent smaller. */
const rounds = 4;
/** The flow through a cell beside what is exchanged makes rates complex; so much more than its bound is room for transients. */
const room = 1.3;

/**
 * An ellipse for balances of flows between volumes. Its width comes from bounds on the largest eigenvalue of |A| that hold in
 * every round (L. Collatz, Math. Z. 48 (1942) 221-226), its height from the part of the flows that is not exchanged evenly.
 * @param volume of each state
 */
export function ellipseOf(rows: MixedRows, volume: ArrayLike<number>): Ellipse {
  const { size, states } = rows;
  let x = new Float64Array(size).fill(1, 0, states);
  let y = new Float64Array(size);
  let most = Number.POSITIVE_INFINITY;
  for (let round = 0; round < rounds; round++) {
    settle(rows, x);
    const { bound, top } = boundBy(rows, x, y);
    most = Math.min(most, bound);
    if (!(top > 0)) break;
    for (let i = 0; i < states; i++) y[i] = Math.max(y[i] / top, 1e-30);
    [x, y] = [y, x];
  }
  const half = Number.isFinite(most) && most > 0 ? most / 2 : 1;
  return { half, height: Math.min(half, room * unevenness(rows, volume)) };
}

/** y = |A| x by states; the largest y over x, which is a bound, and the largest y. */
function boundBy({ states, start, column, value }: MixedRows, x: Float64Array, y: Float64Array) {
  let bound = 0;
  let top = 0;
  let e = 0;
  for (let i = 0; i < states; i++) {
    let sum = 0;
    for (const end = start[i + 1]; e < end; e++) sum += Math.abs(value[e]) * x[column[e]];
    y[i] = sum;
    if (sum > bound * x[i]) bound = sum / x[i];
    if (sum > top) top = sum;
  }
  return { bound, top };
}

/** Largest sum over the neighbours of a state of half the flow between them that does not come back, over its volume. */
function unevenness({ states, start, column, value }: MixedRows, volume: ArrayLike<number>): number {
  const sum = new Float64Array(states);
  for (let i = 0; i < states; i++) {
    for (let e = start[i]; e < start[i + 1]; e++) {
      const j = column[e];
      if (j === i) continue;
      const flow = value[e] * volume[i];
      const uneven = flow - (j < states ? entryAt(column, value, start[j], start[j + 1], i) * volume[j] : 0);
      if (!(uneven > 0)) continue;
      sum[i] += uneven / 2;
      if (j < states) sum[j] += uneven / 2;
    }
  }
  let most = 0;
  for (let i = 0; i < states; i++) if (sum[i] > most * volume[i]) most = sum[i] / volume[i];
  return most;
}

/** Value in the given column, 0 where there is none; columns ascend. */
function entryAt(column: Int32Array, value: Float64Array, from: number, to: number, wanted: number): number {
  let [low, high] = [from, to];
  while (low < high) {
    const half = (low + high) >> 1;
    if (column[half] < wanted) low = half + 1;
    else high = half;
  }
  return low < to && column[low] === wanted ? value[low] : 0;
}
