import type { SparseRows } from "./sparse.js";
import { uniformization } from "./uniformization.js";

/** exp(A h) and the integral of exp(A s) from 0 to h, dense, row-major. */
export interface DenseStep {
  readonly exponential: Float64Array;
  readonly integral: Float64Array;
}

/**
 * One long step of a stiff system of few states: a short exact step, doubled until it is long enough. Every term is
 * >= 0 where the off-diagonal entries of A are, so only rounding grows, at most in proportion to the doublings.
 * @see C. Moler & C. Van Loan, SIAM Review 45 (2003) 3-49, method 3
 */
export function denseStep(a: SparseRows, h: number): DenseStep {
  const n = a.size;
  const propagator = uniformization(a);
  const doublings = Math.max(0, Math.ceil(Math.log2(h / propagator.longest)));
  const h0 = h / 2 ** doublings;
  let exponential = new Float64Array(n * n);
  let integral = new Float64Array(n * n);
  for (let j = 0; j < n; j++) {
    const x = new Float64Array(n);
    const z = new Float64Array(n);
    x[j] = 1;
    propagator.begin(x, h0);
    propagator.finish(h0, x, z);
    for (let i = 0; i < n; i++) {
      exponential[i * n + j] = x[i];
      integral[i * n + j] = z[i];
    }
  }
  for (let d = 0; d < doublings; d++) {
    const next = product(exponential, integral, n);
    for (let i = 0; i < next.length; i++) next[i] += integral[i];
    integral = next;
    exponential = product(exponential, exponential, n);
  }
  return { exponential, integral };
}

function product(a: Float64Array, b: Float64Array, n: number): Float64Array<ArrayBuffer> {
  const c = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (let k = 0; k < n; k++) {
      const aik = a[i * n + k];
      if (aik === 0) continue;
      for (let j = 0; j < n; j++) c[i * n + j] += aik * b[k * n + j];
    }
  }
  return c;
}
