import type { Ellipse, MixedRows } from "./mixed-rows.js";
import { RowsByWidth } from "./rows-by-width.js";
import { roomFor, Workspace } from "./wasm/workspace.js";

/** What is looked at: a sum over the unknowns, of each polynomial's vector one number. */
interface Look {
  /** Place of the unknown; -1: the sum over all states, each times its volume. */
  readonly at: number;
  /** Bound of the look over the norm of a vector. */
  readonly norm: number;
  scalars: Float64Array;
}

/** What a series leaves out, beside the scale of the sum. */
const leftOut = 1e-11;
/** Vectors made at a time. */
const block = 16;

/**
 * The vectors p_k(A) x, k = 0, 1, ..., of the polynomials of an ellipse, made one after the other, as many as are asked for,
 * by two vectors in turn; of each only what is looked at is kept. One pass over the matrix each; nothing allocated per pass.
 */
export class EllipseFlow {
  /** Vectors made so far. */
  made = 0;
  private readonly looks: readonly Look[];
  /** Root of the sum of weight times square, of the vectors after each block. */
  private norms = new Float64Array(0);
  private readonly wide: RowsByWidth;
  private now: Float64Array;
  private before: Float64Array;
  /** By place, as the vectors are. */
  private readonly volume: Float64Array;
  private readonly weight: Float64Array;

  /**
   * @param start    x, as long as the matrix
   * @param unknowns to look at; the sum of all tracer is looked at besides, under their number
   * @param volume   of each state
   * @param weight   of each state in the norm by which it is told when to stop: its volume where it has one, above 0
   * @param watch    told after each block how many there are; true ends the work, and sums then are what they are
   */
  constructor(
    rows: MixedRows,
    private readonly ellipse: Ellipse,
    start: Float64Array,
    unknowns: readonly number[],
    volume: Float64Array,
    weight = volume,
    private readonly watch: (made: number) => boolean = () => false,
  ) {
    const { size, states } = rows;
    const { half: a, height: b } = ellipse;
    const workspace = new Workspace(RowsByWidth.room(rows) + roomFor({ floats: [size, size, states] }));
    this.wide = new RowsByWidth(rows, workspace, (value, diagonal) => (2 / (a + b)) * (value + (diagonal ? a : 0)));
    const { place } = this.wide;
    this.now = workspace.floats(size);
    this.before = workspace.floats(size);
    this.volume = workspace.floats(states);
    this.weight = weight === volume ? this.volume : new Float64Array(states);
    for (let i = 0; i < size; i++) this.now[place[i]] = start[i];
    for (let i = 0; i < states; i++) {
      this.volume[place[i]] = volume[i];
      this.weight[place[i]] = weight[i];
    }
    this.looks = [...unknowns, -1].map((unknown) => ({
      at: unknown < 0 ? -1 : place[unknown],
      norm: unknown < 0 ? Math.sqrt(volume.reduce((sum, v) => sum + v, 0)) : boundOf(rows, unknown, weight),
      scalars: new Float64Array(0),
    }));
  }

  /**
   * Sum of coefficients times the numbers of a look, vectors being made as they are wanted, until what is left counts no more.
   * It depends on the coefficients alone, not on what was asked before.
   * @param c      beyond their largest they fall
   * @param scale  of the sum: it is good to 1e-11 of this
   * @param largest is told the largest term
   */
  sum(look: number, c: Float64Array, scale: number, largest: { term: number } = { term: 0 }): number {
    const of = this.looks[look];
    let sum = 0;
    for (let k = 0; k < c.length; k++) {
      if (k === this.made) {
        if (this.watch(k)) break;
        this.make();
      }
      const term = c[k] * of.scalars[k];
      sum += term;
      if (Math.abs(term) > largest.term) largest.term = Math.abs(term);
      if (k % block !== block - 1) continue;
      const bound = 2 * of.norm * this.norms[(k + 1) / block - 1];
      const falling = Math.abs(c[k]) < 0.98 * Math.abs(c[k - 1]);
      const rest = (Math.abs(c[k]) / (1 - Math.abs(c[k] / c[k - 1]))) * bound;
      if (falling && rest < leftOut * scale) break;
    }
    return sum;
  }

  /** A block of vectors more. */
  private make(): void {
    const { wide, ellipse, volume, weight } = this;
    const back = (ellipse.half - ellipse.height) / (ellipse.half + ellipse.height);
    if (this.made === this.norms.length) {
      const most = Math.max(16 * block, 2 * this.made);
      for (const look of this.looks) look.scalars = longer(look.scalars, most);
      this.norms = longer(this.norms, most);
    }
    const end = this.made + block;
    for (; this.made < end; this.made++) {
      const k = this.made;
      wide.settle(this.now);
      for (const look of this.looks) if (look.at >= 0) look.scalars[k] = this.now[look.at];
      const total = wide.step(this.now, this.before, k === 0 ? 0.5 : 1, k === 0 ? 0 : back, volume);
      this.looks[this.looks.length - 1].scalars[k] = total;
      [this.now, this.before] = [this.before, this.now];
    }
    // The last two, from which all that follow are made.
    this.norms[end / block - 1] = Math.max(normOf(this.now, weight), normOf(this.before, weight));
  }
}

/** Largest value of an unknown over the norm of the states that it is made of. */
function boundOf(rows: MixedRows, unknown: number, weight: Float64Array): number {
  const { states, start, column, value } = rows;
  if (unknown < states) return 1 / Math.sqrt(weight[unknown]);
  let square = 0;
  for (let e = start[unknown]; e < start[unknown + 1]; e++)
    square += (value[e] * boundOf(rows, column[e], weight)) ** 2;
  return Math.sqrt(square);
}

function longer(old: Float64Array, length: number): Float64Array<ArrayBuffer> {
  const next = new Float64Array(length);
  next.set(old);
  return next;
}

/** Root of the sum of weight times square. */
function normOf(x: Float64Array, weight: Float64Array): number {
  let square = 0;
  for (let i = 0; i < weight.length; i++) square += weight[i] * x[i] * x[i];
  return Math.sqrt(square);
}
