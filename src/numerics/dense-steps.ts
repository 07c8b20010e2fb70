/** Rate times step of the series that a long step is doubled from. */
const short = 1;
/** Step lengths whose matrices are kept. */
const mostKept = 64;
/** Rate times step up to which a step that comes once is a series of vectors. */
const longest = 12;

interface Step {
  readonly h: number;
  readonly matrix: Float64Array;
}

/**
 * Carries x' = A x and its derivatives along directions, y_p' = A y_p + A_p x, exactly, for small dense systems. A state is
 * [x, y_1, ..., y_p] in a row. Every step length has its matrices [exp(A h), d exp(A h)/dp], kept for when it comes again: a
 * series of short steps, doubled; on the block [[A, 0], [A_p, A]] that is the derivative of the exponential itself.
 * @see C. Moler & C. Van Loan, SIAM Review 45 (2003) 3-49; R. Mathias, SIAM J. Matrix Anal. Appl. 17 (1996) 610-620
 */
export class DenseSteps {
  /** Numbers in a state. */
  readonly length: number;
  private readonly rate: number;
  private readonly jump: Float64Array;
  private readonly kept: Step[] = [];
  private last: Step | undefined;
  /** Length of the last step that was a series. */
  private once = Number.NaN;
  private readonly term: Float64Array;
  private readonly scratch: Float64Array;

  /**
   * @param n  order of A
   * @param a  A, then A_1, A_2, ...: n x n each, row-major; off-diagonal entries of A not negative, but for rounding
   */
  constructor(
    private readonly n: number,
    a: Float64Array,
  ) {
    const count = n === 0 ? 0 : a.length / (n * n);
    this.length = n * count;
    this.scratch = new Float64Array(this.length);
    this.term = new Float64Array(this.length);
    let rate = 0;
    for (let i = 0; i < n; i++) rate = Math.max(rate, -a[i * n + i]);
    this.rate = rate;
    this.jump = Float64Array.from(a);
    if (rate > 0) for (let k = 0; k < a.length; k++) this.jump[k] /= rate;
    if (rate > 0) for (let i = 0; i < n; i++) this.jump[i * n + i] += 1;
  }

  /**
   * v <- v a time h later.
   * @param slack  s: a step of a length this near to h may be taken instead
   * @returns the length of the step that was taken
   */
  advance(v: Float64Array, h: number, slack: number): number {
    if (!(h > 0)) return h;
    const { last } = this;
    if (last && Math.abs(last.h - h) <= slack) {
      this.apply(last.matrix, v);
      return last.h;
    }
    let step = this.kept.find((s) => Math.abs(s.h - h) <= slack);
    if (!step && !(Math.abs(this.once - h) <= slack) && this.rate * h <= longest) {
      this.once = h;
      this.series(v, h);
      return h;
    }
    if (!step) {
      step = { h, matrix: this.exponential(h) };
      if (this.kept.length < mostKept) this.kept.push(step);
    }
    this.last = step;
    this.apply(step.matrix, v);
    return step.h;
  }

  /** One step by the series of vectors: cheaper than a matrix that is used once. */
  private series(v: Float64Array, h: number): void {
    const { jump, rate, length, term } = this;
    const theta = rate > 0 ? rate * h : h;
    let weight = rate > 0 ? Math.exp(-theta) : 1;
    term.set(v);
    for (let i = 0; i < length; i++) v[i] *= weight;
    for (let k = 1; k < 200; k++) {
      weight *= theta / k;
      this.apply(jump, term);
      let size = 0;
      for (let i = 0; i < length; i++) {
        v[i] += weight * term[i];
        size += Math.abs(term[i]);
      }
      if ((k > theta && weight * k < 1e-18) || size === 0) return;
    }
  }

  private apply(e: Float64Array, v: Float64Array): void {
    const { n, length, scratch } = this;
    if (n <= 2) {
      if (n === 1) this.applyToOne(e, v);
      else if (n === 2) this.applyToTwo(e, v);
      return;
    }
    for (let i = 0; i < n; i++) {
      let sum = 0;
      for (let j = 0; j < n; j++) sum += e[i * n + j] * v[j];
      scratch[i] = sum;
    }
    for (let from = n; from < length; from += n) {
      const d = from * n;
      for (let i = 0; i < n; i++) {
        let sum = 0;
        for (let j = 0; j < n; j++) sum += e[i * n + j] * v[from + j] + e[d + i * n + j] * v[j];
        scratch[from + i] = sum;
      }
    }
    v.set(scratch);
  }

  private applyToOne(e: Float64Array, v: Float64Array): void {
    const x = v[0];
    v[0] = e[0] * x;
    for (let p = 1; p < this.length; p++) v[p] = e[0] * v[p] + e[p] * x;
  }

  private applyToTwo(e: Float64Array, v: Float64Array): void {
    const e0 = e[0];
    const e1 = e[1];
    const e2 = e[2];
    const e3 = e[3];
    const x = v[0];
    const y = v[1];
    v[0] = e0 * x + e1 * y;
    v[1] = e2 * x + e3 * y;
    for (let p = 2; p < this.length; p += 2) {
      const a = v[p];
      const b = v[p + 1];
      const d = 2 * p;
      v[p] = e0 * a + e1 * b + e[d] * x + e[d + 1] * y;
      v[p + 1] = e2 * a + e3 * b + e[d + 2] * x + e[d + 3] * y;
    }
  }

  private exponential(h: number): Float64Array {
    const { n, jump, rate } = this;
    const theta = rate * h;
    const doublings = theta > short ? Math.ceil(Math.log2(theta / short)) : 0;
    const small = rate > 0 ? theta / 2 ** doublings : h;
    const first = rate > 0 ? Math.exp(-small) : 1;
    let sum = new Float64Array(jump.length);
    let term = new Float64Array(jump.length);
    let next = new Float64Array(jump.length);
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
