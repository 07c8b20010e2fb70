import { product as times } from "./squaring.js";

/**
 * exp(t T) and its integrals over t applied to a first unit vector, for one small dense matrix T and any number of times: powers
 * of two of a short step, kept as exp - 1 so that what is near 1 keeps its digits, multiplied as the binary digits of t say.
 * @see N.J. Higham, SIAM J. Matrix Anal. Appl. 26 (2005) 1179-1193 (scaling and squaring)
 */
export class ReducedFlow {
  private readonly size: number;
  private readonly whole: number;
  /** exp(2^j short B) - 1. */
  private readonly steps: Float64Array[] = [];
  private readonly matrix: Float64Array;
  private readonly short: number;
  private readonly scratch: [Float64Array, Float64Array];

  /**
   * @param t    n x n, row-major, 1/s
   * @param n    its order
   * @param span s; nothing later is asked
   */
  constructor(
    t: Float64Array,
    n: number,
    private readonly span: number,
  ) {
    // Three more unknowns, each the integral of the next: the first drives the first of T.
    const size = n + 3;
    const b = new Float64Array(size * size);
    for (let i = 0; i < n; i++) b.set(t.subarray(i * n, (i + 1) * n), i * size);
    b[n] = 1;
    // In units of the span, so that their sizes are alike.
    b[n * size + n + 1] = 1 / span;
    b[(n + 1) * size + n + 2] = 1 / span;
    let norm = 0;
    for (let i = 0; i < size; i++) {
      let sum = 0;
      for (let j = 0; j < size; j++) sum += Math.abs(b[i * size + j]);
      norm = Math.max(norm, sum);
    }
    const doublings = Math.max(0, Math.ceil(Math.log2(norm * span * 4)));
    this.size = size;
    this.whole = n;
    this.matrix = b;
    this.short = span / 2 ** doublings;
    this.scratch = [new Float64Array(size), new Float64Array(size)];
    let f = shortStep(b, size, this.short);
    for (let j = 0; j <= doublings; j++) {
      this.steps.push(f);
      if (j < doublings) f = doubled(f, size);
    }
  }

  /** The first n unknowns at time t: order 0 of exp(t T) e1, else of its integral taken so many times. Good until the next call. */
  at(t: number, order: number): Float64Array {
    const { size, whole, steps, short, span } = this;
    const [x, y] = this.scratch;
    x.fill(0);
    x[order === 0 ? 0 : whole + order - 1] = order < 2 ? 1 : span ** (order - 1);
    let count = Math.floor(t / short);
    const rest = t - count * short;
    for (let j = steps.length - 1; j >= 0; j--) {
      const one = 2 ** j;
      for (; count >= one; count -= one) addProduct(steps[j], size, x, y);
    }
    // What is left is shorter than the shortest step: a few terms.
    const term = x.slice();
    for (let k = 1; k <= 12; k++) {
      y.fill(0);
      product(this.matrix, size, term, y);
      for (let i = 0; i < size; i++) {
        term[i] = (y[i] * rest) / k;
        x[i] += term[i];
      }
    }
    return x.subarray(0, whole);
  }
}

/** x += F x. */
function addProduct(f: Float64Array, n: number, x: Float64Array, y: Float64Array): void {
  product(f, n, x, y);
  for (let i = 0; i < n; i++) x[i] += y[i];
}

function product(a: Float64Array, n: number, x: Float64Array, y: Float64Array): void {
  for (let i = 0, e = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += a[e++] * x[j];
    y[i] = sum;
  }
}

/** exp(h B) - 1 by its series; h |B| is at most a quarter. */
function shortStep(b: Float64Array, n: number, h: number): Float64Array {
  let term = b.map((v) => v * h);
  const sum = term.slice();
  for (let k = 2; k <= 12; k++) {
    term = times(term, b, n).map((v) => (v * h) / k);
    for (let i = 0; i < sum.length; i++) sum[i] += term[i];
  }
  return sum;
}

/** (1 + F)^2 - 1. */
function doubled(f: Float64Array, n: number): Float64Array {
  const g = times(f, f, n);
  for (let i = 0; i < g.length; i++) g[i] += 2 * f[i];
  return g;
}
