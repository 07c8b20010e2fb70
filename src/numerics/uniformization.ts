import type { SparseRows } from "./sparse.js";
import { multiply } from "./sparse.js";

/** Carries a state through x' = A x exactly, and its time integral with it. */
export interface Propagator {
  /** x <- exp(A h) x and z <- z + integral of x over the step; in place, no allocation after the first call. h >= 0. */
  step(x: Float64Array, z: Float64Array, h: number): void;
}

/** Above this many Poisson terms a step is made by squaring a dense matrix instead (a stiff system, few states). */
const manyTerms = 4000;
/** Rate times step of one substep: Poisson weights stay well scaled. */
const substep = 32;

/**
 * Exact stepping of x' = A x for a matrix whose off-diagonal entries are not negative (flows between volumes):
 * exp(A h) = sum of Poisson(k; L h) P^k with P = I + A/L, L the largest rate, all terms >= 0, so nothing cancels.
 * The same vectors P^k x give the integral with weights P(N > k)/L. Error near round-off; cost about L h matrix products.
 * @see A. Jensen, Skand. Aktuarietidskr. 36 (1953) 87-91; W. K. Grassmann, Comput. Oper. Res. 4 (1977) 47-53
 */
export function uniformization(a: SparseRows): Propagator {
  const n = a.size;
  let rate = 0;
  for (let i = 0; i < n; i++) {
    for (let k = a.start[i]; k < a.start[i + 1]; k++) if (a.column[k] === i) rate = Math.max(rate, -a.value[k]);
  }
  const jump = { ...a, value: a.value.map((v) => (rate > 0 ? v / rate : 0)) };
  const v = new Float64Array(n);
  const w = new Float64Array(n);
  const sumX = new Float64Array(n);
  const dense = new Map<string, Float64Array>();

  /** One step with L h <= substep. */
  function small(x: Float64Array, z: Float64Array, h: number): void {
    const theta = rate * h;
    if (theta === 0) {
      // No rate at all: the state grows at most linearly (pure sources). Two terms are exact for nilpotent drives.
      multiply(a, x, v);
      multiply(a, v, w);
      for (let i = 0; i < n; i++) {
        z[i] += h * (x[i] + (h / 2) * (v[i] + (h / 3) * w[i]));
        x[i] += h * (v[i] + (h / 2) * w[i]);
      }
      return;
    }
    let weight = Math.exp(-theta);
    let tail = -Math.expm1(-theta); // P(N > k)
    v.set(x);
    sumX.fill(0);
    for (let k = 0; ; k++) {
      const share = tail / rate;
      for (let i = 0; i < n; i++) {
        sumX[i] += weight * v[i];
        z[i] += share * v[i];
      }
      if (k > theta && weight < 1e-18 && tail < 1e-17) break;
      multiply(jump, v, w);
      for (let i = 0; i < n; i++) v[i] += w[i];
      weight *= theta / (k + 1);
      // Summed downward the tail would cancel; past the mean it is the geometric remainder of the weights.
      tail = k + 1 > theta ? poissonTail(weight, theta, k + 1) : Math.max(0, tail - weight);
    }
    x.set(sumX);
  }

  function stiff(x: Float64Array, z: Float64Array, h: number): void {
    const key = h.toPrecision(13);
    let m = dense.get(key);
    if (!m) {
      m = squared(h);
      dense.set(key, m);
    }
    sumX.fill(0);
    for (let i = 0; i < n; i++) {
      let sx = 0;
      let sz = 0;
      for (let j = 0; j < n; j++) {
        sx += m[i * n + j] * x[j];
        sz += m[n * n + i * n + j] * x[j];
      }
      sumX[i] = sx;
      z[i] += sz;
    }
    x.set(sumX);
  }

  /** [exp(A h), integral of exp(A s)] by doubling from a small step; every term >= 0. */
  function squared(h: number): Float64Array {
    const doublings = Math.max(0, Math.ceil(Math.log2((rate * h) / 8)));
    const h0 = h / 2 ** doublings;
    let e = new Float64Array(n * n);
    let s = new Float64Array(n * n);
    for (let j = 0; j < n; j++) {
      const x = new Float64Array(n);
      const z = new Float64Array(n);
      x[j] = 1;
      small(x, z, h0);
      for (let i = 0; i < n; i++) {
        e[i * n + j] = x[i];
        s[i * n + j] = z[i];
      }
    }
    for (let d = 0; d < doublings; d++) {
      const es = product(e, s, n);
      for (let i = 0; i < es.length; i++) es[i] += s[i];
      s = es;
      e = product(e, e, n);
    }
    const both = new Float64Array(2 * n * n);
    both.set(e);
    both.set(s, n * n);
    return both;
  }

  return {
    step(x, z, h) {
      if (!(h > 0) || n === 0) return;
      if (rate * h > manyTerms && n <= 200) return stiff(x, z, h);
      const steps = Math.max(1, Math.ceil((rate * h) / substep));
      for (let i = 0; i < steps; i++) small(x, z, h / steps);
    },
  };
}

/** P(N > k) for a Poisson number with mean theta < k, from its weight at k: a short geometric-like series. */
function poissonTail(weight: number, theta: number, k: number): number {
  let term = (weight * theta) / (k + 1);
  let sum = 0;
  for (let j = k + 2; term > 1e-17 * sum || sum === 0; j++) {
    sum += term;
    term *= theta / j;
    if (term < 1e-300) break;
  }
  return sum;
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
