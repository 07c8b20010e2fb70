import type { SparseRows } from "./sparse.js";
import { uniformization } from "./uniformization.js";

/** exp(A h) and the integral of exp(A s) from 0 to h, dense, row-major. */
export interface DenseStep {
  readonly exponential: Float64Array;
  readonly integral: Float64Array;
}

/**
 * One long step of a stiff system of few states: a short exact step, doubled until it is long enough. Every term is
 * >= 0 where the off-diagonal entries of A are. The diagonal, in which each doubling would double what rounding has left,
 * is found anew from what no doubling may change: a mixture of one concentration fades only by what leaves it.
 * @see C. Moler & C. Van Loan, SIAM Review 45 (2003) 3-49, method 3; J. Xue & Q. Ye, Numer. Math. 110 (2008) 393-403 (from memory:
 *   entrywise accuracy where the sums of rows are kept beside the entries)
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
  const fades = fading(a);
  if (fades) keepSums(exponential, integral, fades);
  for (let d = 0; d < doublings; d++) {
    const next = product(exponential, integral, n);
    for (let i = 0; i < next.length; i++) next[i] += integral[i];
    integral = next;
    exponential = product(exponential, exponential, n);
    if (fades) keepSums(exponential, integral, fades);
  }
  return { exponential, integral };
}

interface Fading {
  /** 1 for what turns over, 0 for what only grows or drives: the vector of one concentration. */
  readonly even: Float64Array;
  /** What nothing leaves and nothing that turns over enters: it keeps what it has, to the last digit. */
  readonly kept: Uint8Array;
  /** -A even, 1/s: how fast an even mixture fades where it stands. */
  readonly rate: Float64Array;
}

/** How an even mixture fades, where it fades everywhere or stays; undefined where it may also grow, as solids in a settler do. */
function fading(a: SparseRows): Fading | undefined {
  const [even, rate] = [new Float64Array(a.size), new Float64Array(a.size)];
  const kept = new Uint8Array(a.size);
  for (let i = 0; i < a.size; i++) even[i] = diagonal(a, i) < 0 ? 1 : 0;
  for (let i = 0; i < a.size; i++) {
    let sum = 0;
    for (let k = a.start[i]; k < a.start[i + 1]; k++) {
      if (a.value[k] < 0 && a.column[k] !== i) return undefined;
      sum -= a.value[k] * even[a.column[k]];
    }
    const rounding = 4 * Number.EPSILON * -diagonal(a, i);
    if (sum < -rounding) return undefined;
    rate[i] = sum > rounding ? sum : 0;
    kept[i] =
      even[i] === 0 && a.column.subarray(a.start[i], a.start[i + 1]).every((j) => j > i && even[j] === 0) ? 1 : 0;
  }
  return { even, kept, rate };
}

function diagonal(a: SparseRows, i: number): number {
  let sum = 0;
  for (let k = a.start[i]; k < a.start[i + 1]; k++) if (a.column[k] === i) sum += a.value[k];
  return sum;
}

/** Sets the diagonal so that exponential . even = even - integral . rate, as it must. */
function keepSums(exponential: Float64Array, integral: Float64Array, { even, kept, rate }: Fading): void {
  const n = even.length;
  for (let i = 0; i < n; i++) {
    if (kept[i] === 1) exponential[i * n + i] = 1;
    if (even[i] === 0) continue;
    let left = 1;
    for (let j = 0; j < n; j++) {
      left -= integral[i * n + j] * rate[j];
      if (j !== i) left -= exponential[i * n + j] * even[j];
    }
    exponential[i * n + i] = Math.max(0, left);
  }
}

/** A B of two dense n x n matrices, row-major; zeros of A cost nothing. */
export function product(a: Float64Array, b: Float64Array, n: number): Float64Array<ArrayBuffer> {
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
