import { type PieceBasis, Pieces } from "./pieces.js";
import type { Signal, Weight } from "./signal.js";

/** How far a polynomial may miss what it stands for, relative, and in scaled concentrations. */
const relative = 3e-10;
const absolute = 1e-12;
/** No piece is cut shorter than this part of the unit of time. */
const shortest = 1e-7;

/**
 * What comes of other polynomials jumps from one to the next by as much as they may miss: so many tolerances, which do not fall
 * however short a piece is, are let be.
 */
const nearly = 10;

/** What a sampled signal is of. */
export interface Source {
  /** Writes the mixture at t; false where there is none: it then reads NaN. */
  evaluate(t: number, side: number, out: Float64Array): boolean;
  /** Times at which it may jump or kink, ascending. */
  readonly breaks: ArrayLike<number>;
  /** The longest that a piece from t may be, s. */
  longest(t: number): number;
  /** s: a time that matters, for measure. */
  readonly unit: number;
  /** How many tolerances what it gives may be off by itself; default 1. */
  readonly blur?: number;
}

/** A mixture that can be had time by time, made into polynomials as far as it is asked for, each as long as it fits. */
export class Sampled implements Signal {
  private readonly pieces: Pieces;
  private readonly rows: Float64Array[];
  private readonly made: Float64Array;
  private readonly weights: Float64Array;
  private hint = Number.POSITIVE_INFINITY;
  private nextBreak = 0;
  private readonly tried: readonly number[];

  constructor(
    private readonly basis: PieceBasis,
    private readonly width: number,
    private readonly source: Source,
    before: Float64Array | undefined,
  ) {
    this.pieces = new Pieces(basis, width, before);
    this.rows = Array.from(basis.places, () => new Float64Array(width));
    this.made = new Float64Array(width);
    this.weights = new Float64Array(basis.places.length);
    const { places } = basis;
    const last = places.length - 1;
    this.tried = [places[1] / 2, (places[last] + places[last - 1]) / 2];
  }

  read(t: number, side: number, out: Float64Array, to: number): void {
    if (t >= 0) this.reach(t, side);
    this.pieces.read(t, side, out, to);
  }

  integral(t: number, out: Float64Array, weight?: Weight): void {
    this.reach(t, -1);
    this.pieces.integral(t, out, weight);
  }

  pace(t: number, count: number): number {
    const next = this.pieces.pace(t, count);
    // What is not made yet is told by the pieces that there are, and by what it is made of.
    return next < Number.POSITIVE_INFINITY ? next : Math.max(t, this.pieces.end) + count * this.source.longest(t);
  }

  /** Makes pieces until they cover t, and what comes just after it. */
  private reach(t: number, side: number): void {
    while (this.pieces.end < t || (side > 0 && this.pieces.end === t)) this.extend();
  }

  private extend(): void {
    const { source, basis, rows } = this;
    const from = this.pieces.end;
    while (this.nextBreak < source.breaks.length && source.breaks[this.nextBreak] <= from * (1 + 1e-12))
      this.nextBreak++;
    const stop = source.breaks[this.nextBreak] ?? Number.POSITIVE_INFINITY;
    const least = Math.max(shortest * source.unit, 1e-12 * from);
    let length = Math.max(1e-12 * from, Math.min(this.hint, source.longest(from)));
    let before = Number.POSITIVE_INFINITY;
    for (;;) {
      let to = from + length;
      if (to >= stop || stop - to < 0.1 * length) to = stop;
      const span = to - from;
      const good = rows.every((row, p) => {
        const at = p === basis.places.length - 1 ? to : from + span * basis.places[p];
        return source.evaluate(at, p === 0 ? 1 : -1, row);
      });
      const error = good ? this.error(from, span) : Number.NaN;
      const smooth = !(error < nearly && error > before / 4);
      before = error;
      if (!(error > 1) || length <= least || !smooth) {
        if (!good) for (const row of rows) row.fill(Number.NaN);
        this.pieces.add(from, span, (p, into, at) => into.set(rows[p], at));
        const grown = error > 0 ? 0.9 * error ** (-1 / basis.places.length) : 4;
        this.hint = Math.max(least, span * Math.max(0.3, Math.min(4, grown || 1)));
        return;
      }
      length = Math.max(least, span * Math.max(0.1, Math.min(0.6, 0.8 * error ** (-1 / basis.places.length))));
    }
  }

  /** Of the polynomial through the rows, in units of the tolerance. */
  private error(from: number, span: number): number {
    const { basis, rows, made, source, weights, width } = this;
    let worst = 0;
    for (const part of this.tried) {
      if (!source.evaluate(from + span * part, 1, made)) return Number.NaN;
      basis.weigh(part, weights);
      for (let i = 0; i < width; i++) {
        let sum = 0;
        for (let p = 0; p < weights.length; p++) sum += weights[p] * rows[p][i];
        worst = Math.max(
          worst,
          Math.abs(sum - made[i]) / ((source.blur ?? 1) * (relative * Math.abs(made[i]) + absolute)),
        );
      }
    }
    return worst;
  }
}
