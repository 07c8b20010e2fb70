import type { Ellipse } from "./mixed-rows.js";

/** Terms below this are left out: what ends here disturbs every term of an integral, and more so of one integrated again. */
const smallest = 1e-18;

/**
 * exp(t z) and its integrals over t as series in the polynomials of an ellipse that touches 0 from the left: Chebyshev
 * polynomials on its foci, each divided by its growth, which are the Faber polynomials of the ellipse up to a vanishing part.
 * On the ellipse none exceeds 1, so that nothing cancels; coefficients fall as fast as Bessel functions do.
 * p_0 = 1, p_1 = (z + a) / (a + b), p_k+1 = 2 (z + a) / (a + b) p_k - (a - b) / (a + b) p_k-1 with half axes a and b.
 * @see H. Tal-Ezer, J. Sci. Comput. 4 (1989) 25-60; I. Moret, P. Novati, BIT 41 (2001) 595-614 (Faber polynomials)
 */
export class EllipseSeries {
  private ratio = new Float64Array(256);
  /** Of each order of integration one, kept for the next time. */
  private readonly buffers: Float64Array[] = [];
  /** One over the pivots of the elimination in `integral`; they depend on the ellipse alone. */
  private inverse = new Float64Array(0);

  constructor(private readonly ellipse: Ellipse) {}

  /**
   * Coefficients of exp(t z), as many as count; t >= 0, s. They depend on t alone, and are good until the next call of this.
   */
  exponential(t: number): Float64Array {
    const { half: a, height: b } = this.ellipse;
    const most = t > 0 ? Math.ceil(b * t + Math.sqrt(90 * a * t)) + 40 : 0;
    const c = this.buffer(0, most + 1);
    if (!(t > 0)) {
      c[0] = 1;
      return c.subarray(0, 1);
    }
    if (this.ratio.length < most + 2) this.ratio = new Float64Array(2 * most + 2);
    const { ratio } = this; // of a coefficient to the one before it, from the far end (J.C.P. Miller's recurrence)
    const far = (most + 1) / t;
    ratio[most + 1] = (a + b) / (far + Math.sqrt(far * far + (a - b) * (a + b)));
    let top = 0;
    for (let k = most; k >= 1; k--) {
      ratio[k] = (a + b) / ((2 * k) / t + (a - b) * ratio[k + 1]);
      if (top === 0 && ratio[k] >= 1) top = k;
    }
    // From the largest one both ways, so that none overflows; then scaled so that the series is 1 at z = 0.
    const q = (a - b) / (a + b);
    c[top] = 1;
    let sum = 0;
    for (let k = top; k >= 1; k--) c[k - 1] = c[k] / ratio[k];
    for (let k = top + 1; k <= most; k++) c[k] = c[k - 1] * ratio[k];
    for (let k = 0, power = 1; k <= most; k++, power *= q) sum += c[k] * (k === 0 ? 1 : 1 + power);
    let count = most + 1;
    while (count > 1 && 2 * c[count - 1] <= smallest * sum) count--;
    c[0] /= sum;
    for (let k = 1; k < count; k++) c[k] *= 2 / sum;
    return c.subarray(0, count);
  }

  /**
   * Coefficients of the integral over t, from 0 on, of what has the given coefficients: (f(z) - f(0)) / z, by elimination. Good
   * until the next call for that order.
   * @param order how often the exponential is then integrated: 1, 2 or 3
   */
  integral(f: Float64Array, order: number, t: number): Float64Array {
    const { half: a, height: b } = this.ellipse;
    const n = f.length;
    const below = (a + b) / 2;
    const above = (a - b) / 2;
    const inverse = this.pivots(n);
    const g = this.buffer(order, n);
    g[0] = f[0] - (order === 1 ? 1 : order === 2 ? t : (t * t) / 2);
    if (n > 1) g[1] = f[1] - 2 * below * inverse[0] * g[0];
    for (let k = 2; k < n; k++) g[k] = f[k] - below * inverse[k - 1] * g[k - 1];
    g[n - 1] *= inverse[n - 1];
    for (let k = n - 2; k >= 0; k--) g[k] = (g[k] - above * g[k + 1]) * inverse[k];
    return g.subarray(0, n);
  }

  private pivots(n: number): Float64Array {
    if (this.inverse.length >= n) return this.inverse;
    const { half: a, height: b } = this.ellipse;
    const coupling = ((a + b) * (a - b)) / 4;
    this.inverse = new Float64Array(2 * n);
    this.inverse[0] = -1 / a;
    for (let k = 1; k < 2 * n; k++) this.inverse[k] = -1 / (a + (k === 1 ? 2 : 1) * coupling * this.inverse[k - 1]);
    return this.inverse;
  }

  private buffer(order: number, length: number): Float64Array {
    if (!(this.buffers[order]?.length >= length)) this.buffers[order] = new Float64Array(2 * length);
    return this.buffers[order];
  }
}
