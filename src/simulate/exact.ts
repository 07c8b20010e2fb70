import { type SparseRows, sparseRows } from "../numerics/sparse.js";
import { type DenseStep, denseStep } from "../numerics/squaring.js";
import { uniformization } from "../numerics/uniformization.js";
import { type Answer, type Drive, driveAt, type LinearSystem, type Query, type TracerEngine } from "./linear-system.js";

/** Work (rates times span times entries) above which a small system is stepped by squaring instead. */
const muchWork = 3e8;
const fewStates = 120;

/**
 * Exact stepping by the matrix exponential, to round-off. The drive rides along as two more states, its level and its
 * slope. Between break points one series of vectors serves all times asked.
 */
export const exact: TracerEngine = {
  name: "exact",
  run(system, drive, queries) {
    const n = system.input.length;
    const matrix = drive.times.length > 0 ? augmented(system) : system.rates;
    const x = new Float64Array(matrix.size);
    const z = new Float64Array(matrix.size);
    for (let i = 0; i < n; i++) x[i] = system.input[i] * drive.amount;
    const answers = queries.map((q): Answer => {
      return { value: new Float64Array(q.times.length), integral: new Float64Array(q.times.length) };
    });
    const events = eventsOf(queries);
    const end = events.order.length > 0 ? events.time[events.order[events.order.length - 1]] : 0;
    const stepper = stepperFor(matrix, end);
    let next = 0;
    let u = 0;
    for (let piece = 0; piece <= drive.times.length; piece++) {
      const stop = Math.min(drive.times[piece] ?? end, end);
      const last = piece === drive.times.length;
      while (u < stop || (last && next < events.order.length)) {
        const h = Math.min(stop - u, stepper.longest);
        stepper.begin(x, h);
        // Events at a break point wait for the piece that begins there: values at a jump are limits from the right.
        for (; next < events.order.length; next++) {
          const e = events.order[next];
          const d = events.time[e] - u;
          if (d > h || (d === stop - u && !last)) break;
          const q = events.query[e];
          answerAt(queries[q], stepper, d, z, drive, events.time[e], answers[q], events.place[e]);
        }
        stepper.finish(h, x, z);
        u = h < stop - u ? u + h : stop;
      }
      if (last || drive.times[piece] > end) continue;
      x[n] = drive.level[piece];
      x[n + 1] = drive.slope[piece];
    }
    return { answers, stopped: undefined };
  },
};

/** What stepping needs of a propagator; `at` reads inside the step begun. */
interface Stepper {
  readonly longest: number;
  begin(x: Float64Array, h: number): void;
  at(d: number, states: Int32Array, weights: Float64Array): { value: number; integral: number };
  finish(d: number, x: Float64Array, z: Float64Array): void;
}

function stepperFor(matrix: SparseRows, end: number): Stepper {
  const series = uniformization(matrix);
  const work = (end / series.longest) * 90 * (matrix.value.length + matrix.size);
  return work > muchWork && matrix.size <= fewStates ? squared(matrix) : series;
}

/** A stepper that jumps by dense matrices, one per step length, kept for reuse. */
function squared(matrix: SparseRows): Stepper {
  const n = matrix.size;
  const steps = new Map<string, DenseStep>();
  const from = new Float64Array(n);
  const stepOf = (d: number): DenseStep => {
    const key = d.toPrecision(12);
    const known = steps.get(key) ?? denseStep(matrix, d);
    steps.set(key, known);
    return known;
  };
  const row = (m: Float64Array, i: number): number => {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += m[i * n + j] * from[j];
    return sum;
  };
  return {
    longest: Number.POSITIVE_INFINITY,
    begin: (x) => from.set(x),
    at(d, states, weights) {
      const { exponential, integral } = stepOf(d);
      const read = { value: 0, integral: 0 };
      states.forEach((s, j) => {
        read.value += weights[j] * row(exponential, s);
        read.integral += weights[j] * row(integral, s);
      });
      return read;
    },
    finish(d, x, z) {
      const { exponential, integral } = stepOf(d);
      for (let i = 0; i < n; i++) {
        x[i] = row(exponential, i);
        z[i] += row(integral, i);
      }
    },
  };
}

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

/** Writes a query's value and integral at local time u, `d` into the step begun; z holds integrals up to that step. */
function answerAt(
  query: Query,
  stepper: Stepper,
  d: number,
  z: Float64Array,
  drive: Drive,
  u: number,
  answer: Answer,
  at: number,
): void {
  const { states, weights } = query.signal;
  let value = 0;
  let integral = 0;
  if (states.length > 0) {
    const read = stepper.at(d, states, weights);
    value = read.value;
    integral = read.integral;
    for (let j = 0; j < states.length; j++) integral += weights[j] * z[states[j]];
  }
  const direct = directAt(query, drive, u);
  answer.value[at] = value + direct.value;
  answer.integral[at] = integral + direct.integral;
}

/** The undispersed part of a query at local time u. */
export function directAt({ signal }: Query, drive: Drive, u: number): { value: number; integral: number } {
  if (signal.direct === 0) return { value: 0, integral: 0 };
  const { rate, total } = driveAt(drive, u);
  return { value: signal.direct * rate, integral: signal.direct * total };
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
