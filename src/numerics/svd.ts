/** A = U S V' with m >= n: U is m x n, V n x n, both row-major; singular values fall. */
export interface Svd {
  readonly m: number;
  readonly n: number;
  readonly u: Float64Array;
  readonly singular: Float64Array;
  readonly v: Float64Array;
}

/**
 * Singular values and vectors by one-sided Jacobi rotations, accurate also for small singular values of a matrix whose
 * columns differ widely in size. About 10 m n^2 operations: for small n.
 * @param a m x n, row-major, m >= n; left as it is. A column of U is 0 where its singular value is 0.
 * @see   J. Demmel, K. Veselić, SIAM J. Matrix Anal. Appl. 13 (1992) 1204-1245
 */
export function svd(a: ArrayLike<number>, m: number, n: number): Svd {
  if (m < n) throw new RangeError(`svd wants at least as many rows as columns, got ${m} x ${n}`);
  const w = new Float64Array(m * n); // columns of A V, by columns
  for (let i = 0; i < m; i++) for (let j = 0; j < n; j++) w[j * m + i] = a[i * n + j];
  const v = new Float64Array(n * n); // by columns
  for (let j = 0; j < n; j++) v[j * n + j] = 1;
  for (let sweep = 0, turned = true; turned && sweep < 60; sweep++) {
    turned = false;
    for (let p = 0; p < n - 1; p++) for (let q = p + 1; q < n; q++) if (rotate(w, v, m, n, p, q)) turned = true;
  }
  return sorted(w, v, m, n);
}

/** Makes columns p and q of W orthogonal; false where they already were. */
function rotate(w: Float64Array, v: Float64Array, m: number, n: number, p: number, q: number): boolean {
  let pp = 0;
  let qq = 0;
  let pq = 0;
  for (let i = 0; i < m; i++) {
    const x = w[p * m + i];
    const y = w[q * m + i];
    pp += x * x;
    qq += y * y;
    pq += x * y;
  }
  if (!(Math.abs(pq) > Number.EPSILON * Math.sqrt(pp) * Math.sqrt(qq))) return false;
  const zeta = (qq - pp) / (2 * pq);
  const t = Math.sign(zeta || 1) / (Math.abs(zeta) + Math.hypot(1, zeta));
  const c = 1 / Math.sqrt(1 + t * t);
  turn(w, m, p, q, c, c * t);
  turn(v, n, p, q, c, c * t);
  return true;
}

function turn(x: Float64Array, length: number, p: number, q: number, c: number, s: number): void {
  for (let i = 0; i < length; i++) {
    const a = x[p * length + i];
    const b = x[q * length + i];
    x[p * length + i] = c * a - s * b;
    x[q * length + i] = s * a + c * b;
  }
}

function sorted(w: Float64Array, v: Float64Array, m: number, n: number): Svd {
  const singular = new Float64Array(n);
  const order = new Int32Array(n);
  for (let j = 0; j < n; j++) {
    const norm = lengthOf(w, j * m, (j + 1) * m);
    let place = j;
    for (; place > 0 && singular[place - 1] < norm; place--) {
      singular[place] = singular[place - 1];
      order[place] = order[place - 1];
    }
    singular[place] = norm;
    order[place] = j;
  }
  const u = new Float64Array(m * n);
  const vs = new Float64Array(n * n);
  for (let j = 0; j < n; j++) {
    const from = order[j];
    const norm = singular[j];
    for (let i = 0; i < m; i++) u[i * n + j] = norm > 0 ? w[from * m + i] / norm : 0;
    for (let i = 0; i < n; i++) vs[i * n + j] = v[from * n + i];
  }
  return { m, n, u, singular, v: vs };
}

/** Euclidean length, safe from overflow. */
function lengthOf(w: Float64Array, from: number, to: number): number {
  let sum = 0;
  for (let i = from; i < to; i++) sum += w[i] * w[i];
  return sum > 1e-200 && sum < 1e200 ? Math.sqrt(sum) : Math.hypot(...w.subarray(from, to));
}
