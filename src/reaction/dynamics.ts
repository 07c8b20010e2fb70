import { integrate } from "../numerics/integrate.js";
import { blockMatrix, clear } from "./block-matrix.js";
import type { GroupBalance } from "./group.js";

/** A joint has no memory: it follows within this part of the quickest body. */
const quick = 1e-3;
/** Mean times of the group that are followed at a time, and how often; twice as long each time where that takes few steps: a trace that grows. */
const span = 30;
const spells = 8;
const few = 300;

/**
 * Follows a group in time from y until nothing changes any more: cells as they are, other bodies as if they were mixed, which
 * leaves where it ends what it is. So it ends in the state that a vessel filled with y runs into, where all are cells.
 * @returns false where it does not come to rest (it may swing for ever), or could not be followed; y is then the last
 */
export function runInto(balance: GroupBalance, y: Float64Array): boolean {
  const inertia = inertiaOf(balance);
  const { count, size: n } = balance;
  const length = count * n;
  const m = blockMatrix(count, n);
  let possible = true;
  const rhs = (_t: number, at: Float64Array, out: Float64Array): void => {
    possible &&= balance.residual(at, out);
    for (let k = 0; k < length; k++) out[k] /= inertia[Math.floor(k / n)];
  };
  const jacobian = (_t: number, at: Float64Array, out: Float64Array): void => {
    clear(m);
    possible &&= balance.jacobian(at, m);
    m.rows.forEach((row, i) => {
      for (const [j, block] of row) {
        for (let e = 0; e < block.length; e++) {
          out[(i * n + Math.floor(e / n)) * length + j * n + (e % n)] = block[e] / inertia[i];
        }
      }
    });
  };
  const rate = new Float64Array(length);
  const state = y.slice();
  let to = span * balance.meanTime;
  for (let k = 0; k < spells; k++) {
    const run = integrate({
      rhs,
      jacobian,
      start: state,
      from: 0,
      to,
      relative: 1e-6,
      absolute: 1e-10,
      maxSteps: 20_000,
    });
    if (run.end !== "reached" || !possible) break;
    state.set(run.last);
    if (run.stats.steps < few) to *= 2;
    for (let i = 0; i < length; i++) y[i] = Math.max(state[i], 0);
    if (!balance.residual(y, rate)) break;
    if (rate.every((f, i) => Math.abs(f) <= 1e-5 * (Math.abs(y[i]) + 1e-6))) return true;
  }
  return false;
}

/** s, by node: space times, and something short for what has none. */
function inertiaOf({ spaceTime }: GroupBalance): Float64Array {
  const least = spaceTime.reduce((m, t) => (t > 0 ? Math.min(m, t) : m), Number.POSITIVE_INFINITY);
  return spaceTime.map((t) => (t > 0 ? t : Number.isFinite(least) ? quick * least : 1));
}
