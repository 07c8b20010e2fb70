import { integrate } from "../numerics/integrate.js";
import type { Pattern } from "../numerics/linear-solver.js";
import { multiply, type SparseRows } from "../numerics/sparse.js";
import { haltSaid } from "./halts.js";
import { lagsAsStates } from "./lags.js";
import { type Answer, driveAt, type TracerEngine } from "./linear-system.js";

/** Relative tolerance of a step, and the absolute one beside the largest state that the drive can make. */
const relative = 1e-9;
const absolute = 1e-12;

/**
 * The compiled balances in time, by extrapolation (odex), stopped at every break of the drive. Tubes are no part of it:
 * they are unrolled, so no front meets an integrator. The integrals are integrated as states of their own. For many cells
 * that are not stiff: no matrix is factored.
 */
export const extrapolation: TracerEngine = {
  name: "ode",
  run(asked, drive, wanted) {
    const { system, queries } = lagsAsStates(asked, wanted, () => true);
    const n = system.input.length;
    const times = Float64Array.from(
      new Set(queries.flatMap((q) => (q.signal.states.length > 0 ? [...q.times].filter((t) => t >= 0) : []))),
    ).sort();
    const end = times[times.length - 1] ?? 0;
    const start = new Float64Array(2 * n);
    for (let i = 0; i < n; i++) start[i] = system.input[i] * drive.amount;
    const dx = new Float64Array(n);
    const size = absolute * sizeOf(drive.amount, drive.level, end) * system.input.reduce((m, b) => Math.max(m, b), 0);
    const { pattern, entries } = withIntegrals(system.rates);
    const solved = integrate({
      pattern,
      jacobian: (_, __, given) => given.set(entries),
      rhs: (u, y, dy) => {
        multiply(system.rates, y, dx);
        const { rate } = drive.times.length > 0 ? driveAt(drive, u) : { rate: 0 };
        for (let i = 0; i < n; i++) {
          dy[i] = dx[i] + system.input[i] * rate;
          dy[n + i] = y[i];
        }
      },
      start,
      from: 0,
      to: end,
      outputs: times,
      stops: drive.times,
      relative,
      absolute: Float64Array.from(start, (_, i) => Math.max(1e-300, i < n ? size : size * Math.max(end, 1))),
    });
    const at = new Map(Array.from(solved.times, (t, i) => [t, i]));
    const answers = queries.map((q): Answer => {
      const answer = { value: new Float64Array(q.times.length), integral: new Float64Array(q.times.length) };
      q.times.forEach((u, i) => {
        if (u < 0) return;
        const { states, weights } = q.signal;
        const state = solved.states[at.get(u) ?? -1];
        const { rate, total } = driveAt(drive, u);
        const sum = (offset: number) => states.reduce((m, k, w) => m + weights[w] * state[offset + k], 0);
        const known = state !== undefined || states.length === 0;
        answer.value[i] = known ? q.signal.direct * rate + sum(0) : Number.NaN;
        answer.integral[i] = known ? q.signal.direct * total + sum(n) : Number.NaN;
      });
      return answer;
    });
    const { end: how } = solved;
    const stopped = how === "reached" ? undefined : haltSaid(how.stopped, how.why, "");
    return { answers, stopped };
  },
};

function sizeOf(amount: number, level: Float64Array, span: number): number {
  return amount + level.reduce((m, w) => Math.max(m, Math.abs(w)), 0) * span;
}

/** The Jacobian of states and their integrals. */
function withIntegrals(rates: SparseRows): { pattern: Pattern; entries: Float64Array } {
  const n = rates.size;
  const start = new Int32Array(2 * n + 1);
  start.set(rates.start);
  for (let i = 0; i < n; i++) start[n + i + 1] = start[n + i] + 1;
  const column = new Int32Array(rates.column.length + n);
  const entries = new Float64Array(column.length).fill(1);
  column.set(rates.column);
  entries.set(rates.value);
  for (let i = 0; i < n; i++) column[rates.column.length + i] = i;
  return { pattern: { size: 2 * n, start, column }, entries };
}
