import type { Pattern } from "./linear-solver.js";
import { random } from "./random.js";

/** From so many states on a pattern is looked for; a fuller one than this part of all entries is of no use. */
const fewest = 16;
const fullest = 0.4;

/**
 * Which derivative hangs on which state, found by asking: a state that is no number makes all that is computed from it none. It is asked
 * at `y` and at two states far from it, so that what hangs on a sign is seen both ways.
 * @returns undefined where nearly all hang on all, there are few states, or the right-hand side does not bear being asked
 */
export function findPattern(
  rhs: (t: number, y: Float64Array, dy: Float64Array) => void,
  t: number,
  y: Float64Array,
): Pattern | undefined {
  const n = y.length;
  if (n < fewest) return undefined;
  const rows = Array.from({ length: n }, () => new Set<number>());
  const [usual, there] = [new Float64Array(n), new Float64Array(n)];
  let entries = 0;
  try {
    for (const state of statesNear(y)) {
      rhs(t, state, usual);
      for (let j = 0; j < n; j++) {
        const held = state[j];
        state[j] = Number.NaN;
        there.fill(0);
        rhs(t, state, there);
        state[j] = held;
        for (let i = 0; i < n; i++) {
          if (!Number.isNaN(there[i]) || Number.isNaN(usual[i]) || rows[i].has(j)) continue;
          rows[i].add(j);
          entries++;
        }
        if (entries > fullest * n * n) return undefined;
      }
    }
  } catch {
    return undefined;
  }
  const start = new Int32Array(n + 1);
  rows.forEach((row, i) => {
    start[i + 1] = start[i] + row.size;
  });
  return { size: n, start, column: Int32Array.from(rows.flatMap((row) => [...row].sort((a, b) => a - b))) };
}

/** Evaluations of the right-hand side that it takes. */
export const costOfPattern = (size: number): number => (size < fewest ? 0 : 3 * (size + 1));

/** A state, one with the other signs, and one of the same size in which nothing is alike. */
function statesNear(y: Float64Array): Float64Array[] {
  const { uniform } = random(1);
  const size = y.reduce((most, v) => Math.max(most, Math.abs(v)), 0) || 1;
  const turned = y.map((v) => -v * (1 + 0.5 * uniform()));
  return [y.slice(), turned, y.map(() => size * (2 * uniform() - 1))];
}
