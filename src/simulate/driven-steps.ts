import { DenseSteps } from "../numerics/dense-steps.js";
import { type Drive, since } from "./linear-system.js";

/** A system written densely, with derivatives along directions: A, A_1, ... (n x n each, row-major) and b, b_1, ... in a row. */
export interface DenseSystem {
  readonly n: number;
  readonly a: Float64Array;
  readonly b: Float64Array;
}

/** A driven system at the times asked, in memory that is used again. */
export interface Path {
  /** By time: states [x, y_1, ...], in rows of `length`; not filled where they were not asked for. */
  readonly states: Float64Array;
  readonly length: number;
  /** By time: the rate of tracer that enters just then, and its slope. */
  readonly rate: Float64Array;
  readonly rise: Float64Array;
}

/**
 * A small driven system, x' = A x + b w(u), with its derivatives, stepped from one time asked to the next. Between break
 * points the rate w is linear and rides along as a state or two.
 */
export class DrivenSteps {
  private count = 0;
  private system: DenseSystem;
  private readonly free: DenseSteps;
  private readonly driven: DenseSteps[] = [];
  private readonly drivenMatrices: Float64Array[] = [];
  /** Which of the steppers with a rate have the matrices of this system. */
  private readonly ready: boolean[] = [];
  /** States at the break points, one after another, as far as they were needed. */
  private atBreaks = new Float64Array(0);
  private breaksKnown = 0;
  private start = new Float64Array(0);
  private withRate = new Float64Array(0);
  private path: Path = emptyPath;

  constructor(
    system: DenseSystem,
    private readonly drive: Drive,
  ) {
    this.system = system;
    this.free = new DenseSteps(system.n, system.a);
    this.reset(system);
  }

  /** Another system of the same order under the same drive. */
  reset(system: DenseSystem): void {
    const { n, a, b } = system;
    const { drive } = this;
    this.system = system;
    this.free.reset(a);
    this.ready.length = 0;
    this.breaksKnown = 0;
    if (this.start.length !== b.length) {
      this.count = n === 0 ? 0 : b.length / n;
      this.start = new Float64Array(b.length);
      this.atBreaks = new Float64Array(b.length * drive.times.length);
      this.path = emptyPath;
    }
    for (let i = 0; i < b.length; i++) this.start[i] = b[i] * drive.amount;
  }

  /**
   * The system at local times, ascending, none below 0. Values at a break are limits from the right.
   * @param times  s; those from `first` on, `late` seconds later than the drive's own clock
   * @param moving  false where the states are not looked at
   */
  along(times: Float64Array, first: number, late: Lateness, moving: boolean): Path {
    const { drive } = this;
    const length = this.start.length;
    const size = times.length - first;
    if (this.path.rate.length < size) {
      this.path = {
        states: new Float64Array(size * length),
        length,
        rate: new Float64Array(size),
        rise: new Float64Array(size),
      };
    }
    const { states, rate, rise } = this.path;
    const last = drive.times.length - 1;
    let piece = -1;
    let clock = 0;
    let from: Float64Array = this.start;
    let at = 0;
    const ends = last < 0 || (drive.level[last] === 0 && drive.slope[last] === 0);
    for (let i = 0; i < size; i++) {
      const u = since(times[first + i] - late.start, late.delay);
      if (ends && moving && piece === last && i > 0) {
        // Nothing enters any more: one step after another.
        const h = u - clock;
        const step = this.free.move(from, at, states, i * length, h, 1e-13 * h + 4e-16 * clock);
        if (step > 0) clock += step;
        from = states;
        at = i * length;
        rate[i] = 0;
        rise[i] = 0;
        continue;
      }
      while (piece < last && drive.times[piece + 1] <= u) piece++;
      if (moving) {
        if (piece >= 0 && drive.times[piece] > clock) {
          this.needBreak(piece);
          from = this.atBreaks;
          at = piece * length;
          clock = drive.times[piece];
        }
        clock += this.advance(from, at, states, i * length, clock, u - clock, piece);
        from = states;
        at = i * length;
      }
      rate[i] = piece < 0 ? 0 : drive.level[piece] + drive.slope[piece] * (u - drive.times[piece]);
      rise[i] = piece < 0 ? 0 : drive.slope[piece];
    }
    return this.path;
  }

  private needBreak(piece: number): void {
    const { drive, atBreaks, start } = this;
    const length = start.length;
    for (; this.breaksKnown <= piece; this.breaksKnown++) {
      const p = this.breaksKnown;
      const at = p * length;
      for (let i = 0; i < length; i++) atBreaks[at + i] = p === 0 ? start[i] : atBreaks[at - length + i];
      let clock = p === 0 ? 0 : Math.max(0, drive.times[p - 1]);
      // A step may be a trifle shorter or longer than asked; the second one mends that.
      for (let pass = 0; pass < 2; pass++) {
        clock += this.advance(atBreaks, at, atBreaks, at, clock, drive.times[p] - clock, p - 1);
      }
    }
  }

  /** Steps all states by h in one piece; returns the step that was made. */
  private advance(
    from: Float64Array,
    at: number,
    to: Float64Array,
    into: number,
    clock: number,
    h: number,
    piece: number,
  ): number {
    const slack = 1e-13 * h + 4e-16 * clock;
    const level = piece < 0 ? 0 : this.drive.level[piece] + this.drive.slope[piece] * (clock - this.drive.times[piece]);
    const slope = piece < 0 ? 0 : this.drive.slope[piece];
    if (!(h > 0) || (level === 0 && slope === 0)) return Math.max(0, this.free.move(from, at, to, into, h, slack));
    const { n } = this.system;
    const more = slope === 0 ? 1 : 2;
    const m = n + more;
    const steps = this.drivenSteps(more);
    if (this.withRate.length < steps.length) this.withRate = new Float64Array(steps.length);
    const w = this.withRate;
    w.fill(0);
    for (let p = 0; p < this.count; p++) for (let i = 0; i < n; i++) w[p * m + i] = from[at + p * n + i];
    w[n] = level;
    if (more === 2) w[n + 1] = slope;
    const made = steps.advance(w, h, slack);
    for (let p = 0; p < this.count; p++) for (let i = 0; i < n; i++) to[into + p * n + i] = w[p * m + i];
    return made;
  }

  /** The level of the rate as one more state, and its slope as another. */
  private drivenSteps(more: number): DenseSteps {
    const { n, a, b } = this.system;
    const known = this.driven[more];
    if (known && this.ready[more]) return known;
    const m = n + more;
    const size = this.count * m * m;
    if (this.drivenMatrices[more]?.length !== size) this.drivenMatrices[more] = new Float64Array(size);
    const matrices = this.drivenMatrices[more];
    for (let p = 0; p < this.count; p++) {
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) matrices[(p * m + i) * m + j] = a[(p * n + i) * n + j];
        matrices[(p * m + i) * m + n] = b[p * n + i];
      }
    }
    if (more === 2) matrices[n * m + n + 1] = 1;
    const steps = known ?? new DenseSteps(m, matrices);
    if (known) known.reset(matrices);
    this.driven[more] = steps;
    this.ready[more] = true;
    return steps;
  }
}

/** When a drive began on the clock of the times asked, and how much later it is seen, s. */
export interface Lateness {
  readonly start: number;
  readonly delay: number;
}

const emptyPath: Path = {
  states: new Float64Array(0),
  length: 0,
  rate: new Float64Array(0),
  rise: new Float64Array(0),
};
