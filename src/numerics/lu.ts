/** Factors P A = L U of a dense square matrix: unit L below the diagonal, U on and above it, row-major. */
export interface Lu {
  readonly n: number;
  readonly factors: Float64Array;
  /** Row i of P A is row `rows[i]` of A. */
  readonly rows: Int32Array;
  /** +1 or -1: determinant of P. */
  readonly sign: number;
  /** Working copy of a right-hand side. */
  readonly scratch: Float64Array;
}

/**
 * Gaussian elimination with partial pivoting; 2/3 n^3 operations.
 * @param a n x n, row-major; left as it is
 * @returns "singular" where a pivot is not finite, or so small beside what was subtracted to make it that only rounding is left
 * @see G.H. Golub, C.F. Van Loan, Matrix Computations, 4th ed., Johns Hopkins 2013, sec. 3.4
 */
export function factor(a: ArrayLike<number>, n: number): Lu | "singular" {
  const f = Float64Array.from(a);
  const rows = Int32Array.from({ length: n }, (_, i) => i);
  let sign = 1;
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(f[i * n + k]) > Math.abs(f[pivot * n + k])) pivot = i;
    const size = Math.abs(f[pivot * n + k]);
    if (!(size > 4 * Number.EPSILON * summed(a, f, n, rows[pivot], pivot, k)) || !Number.isFinite(size))
      return "singular";
    if (pivot !== k) {
      for (let j = 0; j < n; j++) {
        const held = f[k * n + j];
        f[k * n + j] = f[pivot * n + j];
        f[pivot * n + j] = held;
      }
      const row = rows[k];
      rows[k] = rows[pivot];
      rows[pivot] = row;
      sign = -sign;
    }
    const diagonal = f[k * n + k];
    for (let i = k + 1; i < n; i++) {
      const l = f[i * n + k] / diagonal;
      f[i * n + k] = l;
      if (l === 0) continue;
      for (let j = k + 1; j < n; j++) f[i * n + j] -= l * f[k * n + j];
    }
  }
  return { n, factors: f, rows, sign, scratch: new Float64Array(n) };
}

/** Solves A x = b in place: b becomes x. Length n. */
export function solve(lu: Lu, b: Float64Array): void {
  const { n, factors: f, rows, scratch: x } = lu;
  for (let i = 0; i < n; i++) {
    let sum = b[rows[i]];
    for (let j = 0; j < i; j++) sum -= f[i * n + j] * x[j];
    x[i] = sum;
  }
  for (let i = n - 1; i >= 0; i--) {
    let sum = x[i];
    for (let j = i + 1; j < n; j++) sum -= f[i * n + j] * x[j];
    x[i] = sum / f[i * n + i];
  }
  b.set(x);
}

/** Solves A' x = b in place: b becomes x. Length n. */
export function solveTransposed(lu: Lu, b: Float64Array): void {
  const { n, factors: f, rows, scratch: x } = lu;
  x.set(b);
  for (let i = 0; i < n; i++) {
    x[i] /= f[i * n + i];
    for (let j = i + 1; j < n; j++) x[j] -= f[i * n + j] * x[i];
  }
  for (let i = n - 1; i >= 0; i--) for (let j = 0; j < i; j++) x[j] -= f[i * n + j] * x[i];
  for (let i = 0; i < n; i++) b[rows[i]] = x[i];
}

/** Determinant of A. */
export function determinant(lu: Lu): number {
  let product = lu.sign;
  for (let i = 0; i < lu.n; i++) product *= lu.factors[i * lu.n + i];
  return product;
}

/** Sum of the magnitudes that entry (i, k) was made of before it became a pivot: its rounding error is a few 1e-16 of this. */
function summed(a: ArrayLike<number>, f: Float64Array, n: number, row: number, i: number, k: number): number {
  let sum = Math.abs(a[row * n + k]);
  for (let j = 0; j < k; j++) sum += Math.abs(f[i * n + j] * f[j * n + k]);
  return sum;
}
