import { exponentialOfTwo } from "./exponential-of-two.js";

/** Rate times step of the series that a long step is doubled from. */
const short = 1;
/** Step lengths whose matrices are kept. */
const mostKept = 64;
/** Rate times step up to which a step that comes once is a series of vectors. */
const longest = 12;

/** Matrices of one step length; memory that is used again for the next system. */
interface Step {
  h: number;
  matrix: Float64Array;
}

/**
 * Carries x' = A x and its derivatives along directions, y_p' = A y_p + A_p x, exactly, for small dense systems. A state is
 * [x, y_1, ..., y_p] in a row. Every step length has its matrices [exp(A h), d exp(A h)/dp], kept for when it comes again: a
 * series of short steps, doubled; on the block [[A, 0], [A_p, A]] that is the derivative of the exponential itself.
 * @see C. Moler & C. Van Loan, SIAM Review 45 (2003) 3-49; R. Mathias, SIAM J. Matrix Anal. Appl. 17 (1996) 610-620
 */
export class DenseSteps {
  /** Numbers in a state. */
  length = 0;
  private rate = 0;
  private a: Float64Array = new Float64Array(0);
  private jump = new Float64Array(0);
  private readonly kept: Step[] = [];
  private inUse = 0;
  private last: Step | undefined;
  /** The last step, where no more are kept. */
  private readonly spare: Step = { h: 0, matrix: new Float64Array(0) };
  /** Length of the last step that was a series. */
  private once = Number.NaN;
  private term = new Float64Array(0);
  private scratch = new Float64Array(0);
  private workspace: Float64Array[] = [];

  /**
   * @param n  order of A
   * @param a  A, then A_1, A_2, ...: n x n each, row-major; off-diagonal entries of A not negative, but for rounding; not to be
   *           changed before the next `reset`
   */
  constructor(
    private readonly n: number,
    a: Float64Array,
  ) {
    this.reset(a);
  }

  /** Another system of the same order; it may have other directions. */
  reset(a: Float64Array): void {
    const { n } = this;
    const count = n === 0 ? 0 : a.length / (n * n);
    if (this.length !== n * count || this.jump.length !== a.length) {
      this.length = n * count;
      this.scratch = new Float64Array(this.length);
      this.term = new Float64Array(this.length);
      this.jump = new Float64Array(a.length);
      this.workspace = [];
      this.kept.length = 0;
    }
    this.inUse = 0;
    this.last = undefined;
    this.once = Number.NaN;
    let rate = 0;
    for (let i = 0; i < n; i++) rate = Math.max(rate, -a[i * n + i]);
    this.rate = rate;
    const { jump } = this;
    const by = rate > 0 ? rate : 1;
    this.a = a;
    for (let k = 0; k < a.length; k++) jump[k] = a[k] / by;
    if (rate > 0) for (let i = 0; i < n; i++) jump[i * n + i] += 1;
  }

  /**
   * v <- v a time h later.
   * @param slack  s: a step of a length this near to h may be taken instead
   * @returns the length of the step that was taken
   */
  advance(v: Float64Array, h: number, slack: number): number {
    return this.move(v, 0, v, 0, h, slack);
  }

  /** The same from one place to another: `to` from `into` on <- `from` from `at` on, a time h later. */
  move(from: Float64Array, at: number, to: Float64Array, into: number, h: number, slack: number): number {
    const { last } = this;
    if (last && Math.abs(last.h - h) <= slack && h > 0) {
      this.apply(last.matrix, from, at, to, into);
      return last.h;
    }
    const step = h > 0 ? this.stepOf(h, slack) : undefined;
    if (step) {
      this.last = step;
      this.apply(step.matrix, from, at, to, into);
      return step.h;
    }
    for (let i = 0; i < this.length; i++) to[into + i] = from[at + i];
    if (h > 0) this.series(to, into, h);
    return h;
  }

  /** The matrices of a step length; undefined where a series of vectors serves, once. */
  private stepOf(h: number, slack: number): Step | undefined {
    const { kept } = this;
    for (let k = 0; k < this.inUse; k++) if (Math.abs(kept[k].h - h) <= slack) return kept[k];
    if (this.n !== 2 && !(Math.abs(this.once - h) <= slack) && this.rate * h <= longest) {
      this.once = h;
      return undefined;
    }
    const matrix = this.exponential(h);
    if (this.inUse === mostKept) {
      this.spare.h = h;
      this.spare.matrix = matrix;
      return this.spare;
    }
    const place = this.inUse++;
    kept[place] ??= { h, matrix: new Float64Array(matrix.length) };
    kept[place].h = h;
    kept[place].matrix.set(matrix);
    return kept[place];
  }

  /** One step by the series of vectors: cheaper than a matrix that is used once. */
  private series(v: Float64Array, at: number, h: number): void {
    const { jump, rate, length, term } = this;
    const theta = rate > 0 ? rate * h : h;
    let weight = rate > 0 ? Math.exp(-theta) : 1;
    for (let i = 0; i < length; i++) {
      term[i] = v[at + i];
      v[at + i] *= weight;
    }
    for (let k = 1; k < 200; k++) {
      weight *= theta / k;
      this.apply(jump, term, 0, term, 0);
      let size = 0;
      for (let i = 0; i < length; i++) {
        v[at + i] += weight * term[i];
        size += Math.abs(term[i]);
      }
      if ((k > theta && weight * k < 1e-18) || size === 0) return;
    }
  }

  private apply(e: Float64Array, from: Float64Array, at: number, to: Float64Array, into: number): void {
    const { n, length } = this;
    if (n <= 2) {
      if (n === 1) applyToOne(e, length, from, at, to, into);
      else if (n === 2) applyToTwo(e, length, from, at, to, into);
      return;
    }
    const inPlace = from === to && at === into;
    const made = inPlace ? this.scratch : to;
    const base = inPlace ? 0 : into;
    for (let i = 0; i < n; i++) {
      let sum = 0;
      for (let j = 0; j < n; j++) sum += e[i * n + j] * from[at + j];
      made[base + i] = sum;
    }
    for (let block = n; block < length; block += n) {
      const d = block * n;
      for (let i = 0; i < n; i++) {
        let sum = 0;
        for (let j = 0; j < n; j++) sum += e[i * n + j] * from[at + block + j] + e[d + i * n + j] * from[at + j];
        made[base + block + i] = sum;
      }
    }
    if (inPlace) for (let i = 0; i < length; i++) to[into + i] = made[i];
  }

  /** exp(A h) and its derivatives; good until the next. */
  private exponential(h: number): Float64Array {
    const { n, jump, rate } = this;
    if (n === 2 && jump[1] * jump[2] >= 0) {
      this.workspace[0] ??= new Float64Array(jump.length);
      exponentialOfTwo(this.a, h, this.workspace[0]);
      return this.workspace[0];
    }
    const theta = rate * h;
    const doublings = theta > short ? Math.ceil(Math.log2(theta / short)) : 0;
    const small = rate > 0 ? theta / 2 ** doublings : h;
    const first = rate > 0 ? Math.exp(-small) : 1;
    this.workspace[0] ??= new Float64Array(jump.length);
    this.workspace[1] ??= new Float64Array(jump.length);
    this.workspace[2] ??= new Float64Array(jump.length);
    let [sum, term, next] = this.workspace;
    sum.fill(0);
    term.fill(0);
    for (let i = 0; i < n; i++) sum[i * n + i] = term[i * n + i] = first;
    // The derivatives' terms are at most k times as large as the weight: a few more terms carry them too.
    let weight = 1;
    for (let k = 1; k < 60 && weight * k > 1e-19; k++) {
      product(term, jump, n, next, small / k);
      for (let i = 0; i < sum.length; i++) sum[i] += next[i];
      [term, next] = [next, term];
      weight *= small / k;
      if (rate === 0 && next.every((x) => x === 0)) break;
    }
    for (let d = 0; d < doublings; d++) {
      product(sum, sum, n, next, 1);
      [sum, next] = [next, sum];
    }
    return sum;
  }
}

/** c = factor [a_0 b_0, a_p b_0 + a_0 b_p, ...]: the product of two matrices with their derivatives. */
function product(a: Float64Array, b: Float64Array, n: number, c: Float64Array, factor: number): void {
  const size = n * n;
  for (let from = 0; from < a.length; from += size) {
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let sum = 0;
        if (from === 0) for (let k = 0; k < n; k++) sum += a[i * n + k] * b[k * n + j];
        else {
          for (let k = 0; k < n; k++) {
            sum += a[from + i * n + k] * b[k * n + j] + a[i * n + k] * b[from + k * n + j];
          }
        }
        c[from + i * n + j] = factor * sum;
      }
    }
  }
}

function applyToOne(
  e: Float64Array,
  length: number,
  from: Float64Array,
  at: number,
  to: Float64Array,
  into: number,
): void {
  const x = from[at];
  to[into] = e[0] * x;
  for (let p = 1; p < length; p++) to[into + p] = e[0] * from[at + p] + e[p] * x;
}

function applyToTwo(
  e: Float64Array,
  length: number,
  from: Float64Array,
  at: number,
  to: Float64Array,
  into: number,
): void {
  const e0 = e[0];
  const e1 = e[1];
  const e2 = e[2];
  const e3 = e[3];
  const x = from[at];
  const y = from[at + 1];
  to[into] = e0 * x + e1 * y;
  to[into + 1] = e2 * x + e3 * y;
  for (let p = 2; p < length; p += 2) {
    const a = from[at + p];
    const b = from[at + p + 1];
    const d = 2 * p;
    to[into + p] = e0 * a + e1 * b + e[d] * x + e[d + 1] * y;
    to[into + p + 1] = e2 * a + e3 * b + e[d + 2] * x + e[d + 3] * y;
  }
}
