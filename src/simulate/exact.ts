import { type SparseRows, sparseRows } from "../numerics/sparse.js";
import { uniformization } from "../numerics/uniformization.js";
import { type Answer, type Drive, driveAt, type LinearSystem, type Query, type TracerEngine } from "./linear-system.js";

/**
 * Exact stepping by the matrix exponential between the times asked, to round-off. The drive rides along as two more
 * states, its level and its slope.
 */
export const exact: TracerEngine = {
  name: "exact",
  run(system, drive, queries) {
    const n = system.input.length;
    const driven = drive.times.length > 0;
    const size = driven ? n + 2 : n;
    const propagator = uniformization(driven ? augmented(system) : system.rates);
    const x = new Float64Array(size);
    const z = new Float64Array(size);
    for (let i = 0; i < n; i++) x[i] = system.input[i] * drive.amount;
    const answers = queries.map((q): Answer => {
      return { value: new Float64Array(q.times.length), integral: new Float64Array(q.times.length) };
    });
    const events = eventsOf(queries);
    let piece = 0;
    let u = 0;
    const advance = (to: number) => {
      propagator.step(x, z, to - u);
      u = to;
    };
    for (const e of events.order) {
      const time = events.time[e];
      // Break points first: values at a jump are limits from the right.
      for (; piece < drive.times.length && drive.times[piece] <= time; piece++) {
        advance(drive.times[piece]);
        x[n] = drive.level[piece];
        x[n + 1] = drive.slope[piece];
      }
      advance(time);
      const q = events.query[e];
      readOff(queries[q], x, z, drive, u, answers[q], events.place[e]);
    }
    return { answers, stopped: undefined };
  },
};

/** All times asked, not negative, with their query and place in it, and the order in which they come. */
function eventsOf(queries: readonly Query[]) {
  const count = queries.reduce((sum, q) => sum + q.times.length, 0);
  const time = new Float64Array(count);
  const query = new Int32Array(count);
  const place = new Int32Array(count);
  let used = 0;
  queries.forEach((q, i) => {
    for (let k = 0; k < q.times.length; k++) {
      if (q.times[k] < 0) continue;
      time[used] = q.times[k];
      query[used] = i;
      place[used++] = k;
    }
  });
  const order = Uint32Array.from({ length: used }, (_, i) => i).sort((a, b) => time[a] - time[b]);
  return { time, query, place, order };
}

/** Writes a query's value and integral at local time u. */
export function readOff(
  query: Query,
  x: Float64Array,
  z: Float64Array,
  drive: Drive,
  u: number,
  answer: Answer,
  at: number,
): void {
  const { states, weights, direct } = query.signal;
  let value = 0;
  let integral = 0;
  for (let j = 0; j < states.length; j++) {
    value += weights[j] * x[states[j]];
    integral += weights[j] * z[states[j]];
  }
  if (direct !== 0) {
    const { rate, total } = driveAt(drive, u);
    value += direct * rate;
    integral += direct * total;
  }
  answer.value[at] = value;
  answer.integral[at] = integral;
}

/** Adds two states: the rate of tracer put in, and its slope. */
function augmented({ rates, input }: LinearSystem): SparseRows {
  const n = input.length;
  const rows = Array.from({ length: n }, (_, i) => {
    const row = new Map<number, number>();
    for (let k = rates.start[i]; k < rates.start[i + 1]; k++) row.set(rates.column[k], rates.value[k]);
    if (input[i] !== 0) row.set(n, input[i]);
    return row;
  });
  return sparseRows([...rows, new Map([[n + 1, 1]]), new Map()]);
}
