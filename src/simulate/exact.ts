import { type SparseRows, sparseRows } from "../numerics/sparse.js";
import { largestRate } from "../numerics/uniformization.js";
import { lagsAsStates, rowMaps } from "./lags.js";
import { type Answer, type Drive, driveAt, type LinearSystem, type Query, type TracerEngine } from "./linear-system.js";
import { seriesStepper } from "./series-stepper.js";
import { squaringStepper } from "./squaring-stepper.js";
import type { Stepper } from "./stepper.js";

/** What a product with a sparse matrix takes beside its entries, in entries; how many products a mean change of contents takes. */
const [perProduct, productsPerTurn] = [30, 3];
/** Curves have some hundred times, and each has its dense step; setting up those of a long log takes about so many entries. */
const [usualTimes, settingUp] = [400, 2e7];
const fewStates = 120;
/** A detector this much faster than the vessel is filtered in closed form; a slower one is one more state. */
const muchFaster = 2.5;

/**
 * Exact stepping by the matrix exponential, to round-off. The drive rides along as two more states, its level and its
 * slope. Between break points one series of vectors serves all times asked.
 */
export const exact: TracerEngine = {
  name: "exact",
  run(asked, drive, wanted) {
    const end = lastTime(wanted);
    const own = largestRate(asked.rates);
    const stiff = isStiff(asked.rates, own * end);
    const { system, queries } = lagsAsStates(asked, wanted, (lag) => stiff || 1 / lag < muchFaster * own);
    const n = system.input.length;
    const matrix = drive.times.length > 0 ? augmented(system) : system.rates;
    const x = new Float64Array(matrix.size);
    const z = new Float64Array(matrix.size);
    for (let i = 0; i < n; i++) x[i] = system.input[i] * drive.amount;
    const stepper = stiff ? squaringStepper(matrix) : seriesStepper(matrix);
    const readers = queries.map((q) => new Reader(q, drive));
    let u = 0;
    for (let piece = 0; piece <= drive.times.length; piece++) {
      const last = piece === drive.times.length || drive.times[piece] > end;
      const stop = last ? end : drive.times[piece];
      // Events at a break point wait for the piece that begins there: values at a jump are limits from the right.
      while (u < stop || (last && u === stop)) {
        const h = Math.min(stop - u, stepper.longest);
        const final = u + h >= stop || h === stop - u;
        stepper.begin(x, h);
        for (const r of readers) r.read(stepper, u, h, z, last && final);
        stepper.finish(h, x, z);
        u = final ? stop : u + h;
        if (last && final) break;
      }
      if (last) break;
      x[n] = drive.level[piece];
      x[n + 1] = drive.slope[piece];
      for (const r of readers) r.driven(drive.level[piece], drive.slope[piece]);
    }
    return { answers: readers.map((r) => r.answer), stopped: undefined };
  },
};

/**
 * Do so few states turn over so often that dense steps, doubled until they are long enough, cost less than products one
 * after another? By the network and the span alone, so that how many times are asked does not decide how one is found.
 */
function isStiff({ size, value }: SparseRows, turns: number): boolean {
  if (size > fewStates || turns < 1) return false;
  const products = productsPerTurn * turns * (value.length + perProduct);
  return products > settingUp + usualTimes * Math.log2(turns) * 2 * size ** 3;
}

/** Reads one query off the steps as they come. Its lag, where it has one, is carried in closed form. */
class Reader {
  readonly answer: Answer;
  private next = 0;
  /** The detector's state at the beginning of the step, and the undispersed rate it sees: level, slope. */
  private seen: number;
  private level = 0;
  private slope = 0;

  constructor(
    private readonly query: Query,
    private readonly drive: Drive,
  ) {
    const { times, signal } = query;
    this.answer = { value: new Float64Array(times.length), integral: new Float64Array(times.length) };
    while (this.next < times.length && times[this.next] < 0) this.next++;
    this.seen = signal.lag ? (signal.direct * drive.amount) / signal.lag : 0;
  }

  /** A new piece of the drive begins. */
  driven(level: number, slope: number): void {
    this.level = this.query.signal.direct * level;
    this.slope = this.query.signal.direct * slope;
  }

  /** Answers the times in [u, u + h), and at u + h where the step is the last. */
  read(stepper: Stepper, u: number, h: number, z: Float64Array, closed: boolean): void {
    const { times, signal, integral } = this.query;
    const due = (i: number) => i < times.length && (closed ? times[i] <= u + h : times[i] < u + h);
    if (!due(this.next) && !signal.lag) return;
    const { states, weights, lag } = signal;
    const look = stepper.look(states, weights);
    let before = 0;
    for (let j = 0; j < states.length; j++) before += weights[j] * z[states[j]];
    for (; due(this.next); this.next++) {
      const d = Math.max(0, times[this.next] - u);
      const value = lag ? this.lagged(look.lagged(d, 1 / lag), d, lag) : look.value(d);
      this.answer.value[this.next] = value;
      if (integral) this.answer.integral[this.next] = before + look.integral(d) - (lag ? lag * value : 0);
      if (signal.direct !== 0) this.addDirect(this.next, times[this.next]);
    }
    if (lag) this.seen = this.lagged(look.lagged(h, 1 / lag), h, lag);
    if (lag) this.level += this.slope * h;
  }

  /** The detector's state a time d into the step: what it held fades, what the states and the undispersed rate bring comes in. */
  private lagged(brought: number, d: number, lag: number): number {
    const fade = Math.exp(-d / lag);
    const filled = -Math.expm1(-d / lag);
    return this.seen * fade + brought + this.level * filled + this.slope * (d - lag * filled);
  }

  private addDirect(i: number, u: number): void {
    const { signal } = this.query;
    const { rate, total } = driveAt(this.drive, u);
    if (!signal.lag) this.answer.value[i] += signal.direct * rate;
    this.answer.integral[i] += signal.direct * total;
  }
}

const lastTime = (queries: readonly Query[]): number =>
  queries.reduce((m, { times }) => Math.max(m, times[times.length - 1] ?? 0), 0);

/** Adds two states: the rate of tracer put in, and its slope. */
function augmented({ rates, input }: LinearSystem): SparseRows {
  const n = input.length;
  const rows = rowMaps(rates);
  rows.forEach((row, i) => {
    if (input[i] !== 0) row.set(n, input[i]);
  });
  return sparseRows([...rows, new Map([[n + 1, 1]]), new Map()]);
}
