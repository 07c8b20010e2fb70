import { type DenseProducts, denseProducts, padded } from "./dense-kernels.js";
import { roomFor, Workspace } from "./wasm/workspace.js";

/** Terms of the series over a step that is a quarter of what the matrix changes in: the next is under 1e-17. */
const terms = 12;

/**
 * exp(t T) and its integrals over t applied to a first unit vector, for one small dense matrix T and any number of times: powers
 * of two of a short step, kept as exp - 1 so that what is near 1 keeps its digits, multiplied as the binary digits of t say.
 * @see N.J. Higham, SIAM J. Matrix Anal. Appl. 26 (2005) 1179-1193 (scaling and squaring)
 */
export class ReducedFlow {
  private readonly whole: number;
  /** exp(2^j short B) - 1. */
  private readonly steps: Float64Array[] = [];
  private readonly matrix: Float64Array;
  private readonly short: number;
  private readonly products: DenseProducts;
  private readonly x: Float64Array;
  private readonly y: Float64Array;
  private readonly term: Float64Array;

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
    const order = padded(n + 3);
    const b = new Float64Array(order * order);
    for (let i = 0; i < n; i++) b.set(t.subarray(i * n, (i + 1) * n), i * order);
    b[n] = 1;
    // In units of the span, so that their sizes are alike.
    b[n * order + n + 1] = 1 / span;
    b[(n + 1) * order + n + 2] = 1 / span;
    let norm = 0;
    for (let i = 0; i < order; i++) {
      let sum = 0;
      for (let j = 0; j < order; j++) sum += Math.abs(b[i * order + j]);
      norm = Math.max(norm, sum);
    }
    const doublings = Math.max(0, Math.ceil(Math.log2(norm * span * 4)));
    const square = order * order;
    const workspace = new Workspace(
      roomFor({ floats: [...new Array<number>(doublings + 4).fill(square), order, order, order] }),
    );
    this.products = denseProducts(order, workspace);
    this.whole = n;
    this.matrix = workspace.floats(square);
    this.matrix.set(b);
    this.short = span / 2 ** doublings;
    [this.x, this.y, this.term] = [workspace.floats(order), workspace.floats(order), workspace.floats(order)];
    const scratch = [workspace.floats(square), workspace.floats(square)];
    for (let j = 0; j <= doublings; j++) {
      const step = workspace.floats(square);
      if (j === 0) this.shortStep(step, scratch);
      else this.double(this.steps[j - 1], step);
      this.steps.push(step);
    }
  }

  /** The first n unknowns at time t: order 0 of exp(t T) e1, else of its integral taken so many times. Good until the next call. */
  at(t: number, order: number): Float64Array {
    const { whole, steps, short, span, x, y, term, products } = this;
    const size = whole + 3;
    x.fill(0);
    x[order === 0 ? 0 : whole + order - 1] = order < 2 ? 1 : span ** (order - 1);
    let count = Math.floor(t / short);
    const rest = t - count * short;
    for (let j = steps.length - 1; j >= 0; j--) {
      const one = 2 ** j;
      for (; count >= one; count -= one) {
        products.apply(steps[j], x, y);
        for (let i = 0; i < size; i++) x[i] += y[i];
      }
    }
    // What is left is shorter than the shortest step: a few terms.
    term.set(x);
    for (let k = 1; k <= terms; k++) {
      products.apply(this.matrix, term, y);
      for (let i = 0; i < size; i++) {
        term[i] = (y[i] * rest) / k;
        x[i] += term[i];
      }
    }
    return x.subarray(0, whole);
  }

  /** exp(short B) - 1 by its series. */
  private shortStep(step: Float64Array, [term, next]: Float64Array[]): void {
    const { matrix, short, products } = this;
    let [now, then] = [term, next];
    for (let i = 0; i < step.length; i++) {
      now[i] = matrix[i] * short;
      step[i] = now[i];
    }
    for (let k = 2; k <= terms; k++) {
      products.multiply(now, matrix, then);
      for (let i = 0; i < step.length; i++) {
        then[i] *= short / k;
        step[i] += then[i];
      }
      [now, then] = [then, now];
    }
  }

  /** (1 + F)^2 - 1. */
  private double(f: Float64Array, twice: Float64Array): void {
    this.products.multiply(f, f, twice);
    for (let i = 0; i < f.length; i++) twice[i] += 2 * f[i];
  }
}
