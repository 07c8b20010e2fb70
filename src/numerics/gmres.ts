import { dot, type IterativeMethod, type IterativeProblem, norm } from "./krylov.js";

/**
 * GMRES begun anew every `restart` products, preconditioned from the right: the residual never grows. Memory: restart + 3 vectors.
 * @see Y. Saad, M.H. Schultz, SIAM J. Sci. Stat. Comput. 7 (1986) 856-869
 */
export function gmres({ size: n, multiply, preconditioner }: IterativeProblem, restart = 30): IterativeMethod {
  const m = Math.max(1, Math.min(restart, n));
  const basis = Array.from({ length: m + 1 }, () => new Float64Array(n));
  const h = new Float64Array((m + 1) * m); // column j at j * (m + 1)
  const cosine = new Float64Array(m);
  const sine = new Float64Array(m);
  const g = new Float64Array(m + 1);
  const step = new Float64Array(n);
  return (b, x, { relative, most }) => {
    const size = norm(b);
    const wanted = relative * size;
    let products = 0;
    let left = Number.POSITIVE_INFINITY;
    while (true) {
      const first = basis[0];
      multiply(x, first);
      products++;
      for (let i = 0; i < n; i++) first[i] = b[i] - first[i];
      const before = left;
      left = norm(first);
      if (left <= wanted) return { reached: true, residual: size > 0 ? left / size : 0, products };
      if (!(left < 0.999 * before) || products >= most) return { reached: false, residual: left / size, products };
      for (let i = 0; i < n; i++) first[i] /= left;
      g.fill(0);
      g[0] = left;
      let j = 0;
      let done = false;
      while (!done && j < m && products < most) {
        const column = j * (m + 1);
        const next = basis[j + 1];
        step.set(basis[j]);
        preconditioner?.apply(step);
        multiply(step, next);
        products++;
        const grown = orthogonalise(basis, j, h, column);
        for (let i = 0; i < j; i++) turn(h, column + i, cosine[i], sine[i]);
        const length = Math.hypot(h[column + j], h[column + j + 1]);
        if (!(length > 0) || !Number.isFinite(length)) break;
        cosine[j] = h[column + j] / length;
        sine[j] = h[column + j + 1] / length;
        h[column + j] = length;
        g[j + 1] = -sine[j] * g[j];
        g[j] *= cosine[j];
        j++;
        done = Math.abs(g[j]) <= wanted || !grown;
      }
      combine(basis, h, g, j, m + 1, step);
      preconditioner?.apply(step);
      for (let i = 0; i < n; i++) x[i] += step[i];
    }
  };
}

/** Takes from the next vector what lies along those before it, twice for rounding. @returns false where nothing is left */
function orthogonalise(basis: readonly Float64Array[], j: number, h: Float64Array, column: number): boolean {
  const next = basis[j + 1];
  const before = norm(next);
  for (let i = 0; i <= j; i++) h[column + i] = 0;
  for (let pass = 0; pass < 2; pass++) {
    for (let i = 0; i <= j; i++) {
      const along = dot(basis[i], next);
      h[column + i] += along;
      for (let k = 0; k < next.length; k++) next[k] -= along * basis[i][k];
    }
  }
  const rest = norm(next);
  const grown = rest > 1e-14 * before;
  h[column + j + 1] = grown ? rest : 0;
  if (grown) for (let k = 0; k < next.length; k++) next[k] /= rest;
  return grown;
}

/** One plane rotation of entries at and at + 1. */
function turn(h: Float64Array, at: number, c: number, s: number): void {
  const upper = h[at];
  const lower = h[at + 1];
  h[at] = c * upper + s * lower;
  h[at + 1] = c * lower - s * upper;
}

/** Solves the small triangle and adds up the basis with it. */
function combine(
  basis: readonly Float64Array[],
  h: Float64Array,
  g: Float64Array,
  count: number,
  stride: number,
  sum: Float64Array,
): void {
  sum.fill(0);
  for (let i = count - 1; i >= 0; i--) {
    for (let k = i + 1; k < count; k++) g[i] -= h[k * stride + i] * g[k];
    g[i] /= h[i * stride + i];
    const weight = g[i];
    const vector = basis[i];
    for (let k = 0; k < sum.length; k++) sum[k] += weight * vector[k];
  }
}
