/**
 * A P = Q R of a dense m x n matrix, m >= n or not: Householder vectors below the diagonal and R on and above it, stored by
 * columns (column j at j * m) for speed.
 */
export interface Qr {
  readonly m: number;
  readonly n: number;
  readonly factors: Float64Array;
  /** 2 / |v|^2 scaled to v[0] = 1, one per reflection. */
  readonly tau: Float64Array;
  /** Column j of A P is column `columns[j]` of A. */
  readonly columns: Int32Array;
  /** Columns that are independent to the tolerance asked. */
  readonly rank: number;
}

/**
 * Householder QR with column pivoting.
 * @param a          m x n, row-major; left as it is
 * @param tolerance  a column counts as dependent once |R[k,k]| falls to this fraction of |R[0,0]|; default max(m, n) * 2^-52
 * @see G.H. Golub, C.F. Van Loan, Matrix Computations, 4th ed., Johns Hopkins 2013, sec. 5.4.2
 */
export function factorQr(a: ArrayLike<number>, m: number, n: number, tolerance = Math.max(m, n) * Number.EPSILON): Qr {
  const f = new Float64Array(m * n);
  for (let i = 0; i < m; i++) for (let j = 0; j < n; j++) f[j * m + i] = a[i * n + j];
  return factorColumns(f, m, n, tolerance);
}

/** The same for a matrix already stored by columns, which is overwritten. */
export function factorColumns(f: Float64Array, m: number, n: number, tolerance = Math.max(m, n) * Number.EPSILON): Qr {
  const steps = Math.min(m, n);
  const tau = new Float64Array(steps);
  const columns = Int32Array.from({ length: n }, (_, j) => j);
  const left = Float64Array.from({ length: n }, (_, j) => tailNorm(f, j * m, (j + 1) * m));
  const whole = left.slice();
  for (let k = 0; k < steps; k++) {
    let pivot = k;
    for (let j = k + 1; j < n; j++) if (left[j] > left[pivot]) pivot = j;
    if (pivot !== k) swapColumns(f, m, k, pivot, columns, left, whole);
    tau[k] = reflect(f, k * m + k, (k + 1) * m);
    for (let j = k + 1; j < n; j++) {
      applyReflection(f, k * m + k, tau[k], f, j * m + k, m - k);
      left[j] = downdated(left[j], whole, j, f, j * m + k, (j + 1) * m);
    }
  }
  let rank = 0;
  const first = steps > 0 ? Math.abs(f[0]) : 0;
  while (rank < steps && Math.abs(f[rank * m + rank]) > tolerance * first) rank++;
  return { m, n, factors: f, tau, columns, rank };
}

/** b becomes Q' b, in place; length m. */
export function applyTransposedQ(qr: Qr, b: Float64Array): void {
  for (let k = 0; k < qr.tau.length; k++) applyReflection(qr.factors, k * qr.m + k, qr.tau[k], b, k, qr.m - k);
}

/** b becomes Q b, in place; length m. */
export function applyQ(qr: Qr, b: Float64Array): void {
  for (let k = qr.tau.length - 1; k >= 0; k--) applyReflection(qr.factors, k * qr.m + k, qr.tau[k], b, k, qr.m - k);
}

/**
 * Solves R z = c for the first `rank` unknowns and puts them back in the order of A's columns; the others are 0.
 * @param c the first entries of Q' b, length >= rank; left as it is
 */
export function solveR(qr: Qr, c: ArrayLike<number>, into = new Float64Array(qr.n)): Float64Array {
  const { m, factors: f, columns, rank } = qr;
  into.fill(0);
  for (let i = rank - 1; i >= 0; i--) {
    let sum = c[i];
    for (let j = i + 1; j < rank; j++) sum -= f[j * m + i] * into[columns[j]];
    into[columns[i]] = sum / f[i * m + i];
  }
  return into;
}

/** Basic least-squares solution of A x = b (m >= n), or one of the exact ones (m < n). @param b length m; left as it is */
export function solveLeastSquares(qr: Qr, b: ArrayLike<number>): Float64Array {
  const c = Float64Array.from(b);
  applyTransposedQ(qr, c);
  return solveR(qr, c);
}

/** Entry (i, j) of R, i <= j < n. */
export const entryOfR = (qr: Qr, i: number, j: number): number => (i > j ? 0 : qr.factors[j * qr.m + i]);

/**
 * (A'A)^-1 through R alone, n x n row-major, in the order of A's columns.
 * @returns "singular" where the rank is below n
 */
export function inverseOfNormal(qr: Qr): Float64Array | "singular" {
  const { m, n, factors: f, columns, rank } = qr;
  if (rank < n) return "singular";
  const inverse = new Float64Array(n * n); // R^-1, upper triangular, row-major
  for (let j = 0; j < n; j++) {
    inverse[j * n + j] = 1 / f[j * m + j];
    for (let i = j - 1; i >= 0; i--) {
      let sum = 0;
      for (let k = i + 1; k <= j; k++) sum -= f[k * m + i] * inverse[k * n + j];
      inverse[i * n + j] = sum / f[i * m + i];
    }
  }
  const normal = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    for (let j = i; j < n; j++) {
      let sum = 0;
      for (let k = j; k < n; k++) sum += inverse[i * n + k] * inverse[j * n + k];
      normal[columns[i] * n + columns[j]] = sum;
      normal[columns[j] * n + columns[i]] = sum;
    }
  }
  return normal;
}

/** Euclidean length of f[from..to), safe from overflow. */
function tailNorm(f: Float64Array, from: number, to: number): number {
  let square = 0;
  for (let i = from; i < to; i++) square += f[i] * f[i];
  if (square > 1e-200 && square < 1e200) return Math.sqrt(square);
  let largest = 0;
  for (let i = from; i < to; i++) largest = Math.max(largest, Math.abs(f[i]));
  if (largest === 0 || !Number.isFinite(largest)) return largest;
  let sum = 0;
  for (let i = from; i < to; i++) sum += (f[i] / largest) ** 2;
  return largest * Math.sqrt(sum);
}

/** Turns f[from..to) into (beta, v[1..]) of the reflection that maps it to (beta, 0, ...); gives tau. */
function reflect(f: Float64Array, from: number, to: number): number {
  const norm = tailNorm(f, from, to);
  if (norm === 0) return 0;
  const beta = f[from] > 0 ? -norm : norm;
  const head = f[from] - beta;
  for (let i = from + 1; i < to; i++) f[i] /= head;
  const tau = -head / beta;
  f[from] = beta;
  return tau;
}

/** x - tau v (v'x) on `length` entries, with v[0] = 1 implied. */
function applyReflection(v: Float64Array, at: number, tau: number, x: Float64Array, on: number, length: number): void {
  if (tau === 0) return;
  let dot = x[on];
  for (let i = 1; i < length; i++) dot += v[at + i] * x[on + i];
  dot *= tau;
  x[on] -= dot;
  for (let i = 1; i < length; i++) x[on + i] -= dot * v[at + i];
}

/** Norm of what is left of a column after one more row is done; recomputed where cancellation has eaten its digits. */
function downdated(norm: number, whole: Float64Array, j: number, f: Float64Array, at: number, to: number): number {
  if (norm === 0) return 0;
  const rest = Math.max(0, 1 - (f[at] / norm) ** 2);
  if (rest * (norm / whole[j]) ** 2 > 1e-8) return norm * Math.sqrt(rest);
  whole[j] = tailNorm(f, at + 1, to);
  return whole[j];
}

function swapColumns(
  f: Float64Array,
  m: number,
  a: number,
  b: number,
  columns: Int32Array,
  left: Float64Array,
  whole: Float64Array,
): void {
  for (let i = 0; i < m; i++) {
    const held = f[a * m + i];
    f[a * m + i] = f[b * m + i];
    f[b * m + i] = held;
  }
  for (const list of [columns, left, whole]) {
    const held = list[a];
    list[a] = list[b];
    list[b] = held;
  }
}
