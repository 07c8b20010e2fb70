import { DenseSteps } from "../numerics/dense-steps.js";
import type { Drive } from "./linear-system.js";

/** A system written densely, with derivatives along directions: A, A_1, ... (n x n each, row-major) and b, b_1, ... in a row. */
export interface DenseSystem {
  readonly n: number;
  readonly a: Float64Array;
  readonly b: Float64Array;
}

/** What is seen of a step: states [x, y_1, ...], and the rate of tracer that enters just then, with its slope. */
export type Visit = (index: number, states: Float64Array, rate: number, slope: number) => void;

/**
 * A small driven system, x' = A x + b w(u), with its derivatives, stepped from one time asked to the next. Between break
 * points the rate w is linear and rides along as a state or two.
 */
export class DrivenSteps {
  private readonly count: number;
  private readonly free: DenseSteps;
  private readonly driven: DenseSteps[] = [];
  /** States at the break points, as far as they were needed. */
  private readonly atBreaks: Float64Array[] = [];
  private readonly start: Float64Array;

  constructor(
    private readonly system: DenseSystem,
    private readonly drive: Drive,
  ) {
    const { n, a, b } = system;
    this.count = n === 0 ? 0 : b.length / n;
    this.free = new DenseSteps(n, a);
    this.start = b.map((x) => x * drive.amount);
  }

  /**
   * Visits local times, ascending, none below 0. Values at a break are limits from the right.
   * @param moving  false where the states are not looked at: then they stay
   */
  walk(times: Float64Array, moving: boolean, visit: Visit): void {
    const { drive } = this;
    const last = drive.times.length - 1;
    let piece = -1;
    let clock = 0;
    const v = Float64Array.from(this.start);
    for (let i = 0; i < times.length; i++) {
      const u = times[i];
      while (piece < last && drive.times[piece + 1] <= u) piece++;
      if (moving) {
        if (piece >= 0 && drive.times[piece] > clock) {
          v.set(this.atBreak(piece));
          clock = drive.times[piece];
        }
        clock += this.advance(v, clock, u - clock, piece);
      }
      const rate = piece < 0 ? 0 : drive.level[piece] + drive.slope[piece] * (u - drive.times[piece]);
      visit(i, v, rate, piece < 0 ? 0 : drive.slope[piece]);
    }
  }

  private atBreak(piece: number): Float64Array {
    const { drive, atBreaks } = this;
    for (let p = atBreaks.length; p <= piece; p++) {
      const v = Float64Array.from(atBreaks[p - 1] ?? this.start);
      let clock = Math.max(0, drive.times[p - 1] ?? 0);
      // A step may be a trifle shorter or longer than asked; the second one mends that.
      for (let pass = 0; pass < 2; pass++) clock += this.advance(v, clock, drive.times[p] - clock, p - 1);
      atBreaks.push(v);
    }
    return atBreaks[piece];
  }

  /** Steps all states by h in one piece; returns the step that was made. */
  private advance(v: Float64Array, clock: number, h: number, piece: number): number {
    if (!(h > 0)) return 0;
    const slack = 1e-13 * h + 4e-16 * clock;
    const level = piece < 0 ? 0 : this.drive.level[piece] + this.drive.slope[piece] * (clock - this.drive.times[piece]);
    const slope = piece < 0 ? 0 : this.drive.slope[piece];
    if (level === 0 && slope === 0) return this.free.advance(v, h, slack);
    const { n } = this.system;
    const more = slope === 0 ? 1 : 2;
    const m = n + more;
    const steps = this.driven[more] ?? this.drivenSteps(more);
    this.driven[more] = steps;
    const w = new Float64Array(steps.length);
    for (let p = 0; p < this.count; p++) for (let i = 0; i < n; i++) w[p * m + i] = v[p * n + i];
    w[n] = level;
    if (more === 2) w[n + 1] = slope;
    const made = steps.advance(w, h, slack);
    for (let p = 0; p < this.count; p++) for (let i = 0; i < n; i++) v[p * n + i] = w[p * m + i];
    return made;
  }

  /** The level of the rate as one more state, and its slope as another. */
  private drivenSteps(more: number): DenseSteps {
    const { n, a, b } = this.system;
    const m = n + more;
    const matrices = new Float64Array(this.count * m * m);
    for (let p = 0; p < this.count; p++) {
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) matrices[(p * m + i) * m + j] = a[(p * n + i) * n + j];
        matrices[(p * m + i) * m + n] = b[p * n + i];
      }
    }
    if (more === 2) matrices[n * m + n + 1] = 1;
    return new DenseSteps(m, matrices);
  }
}
