/** Eigenvalues of a real matrix, in no order; conjugate pairs stand together. */
export interface Eigenvalues {
  readonly real: Float64Array;
  readonly imaginary: Float64Array;
}

const mostSweeps = 60;

/**
 * All eigenvalues of a dense real matrix: Hessenberg form by Householder reflections, then the double-shift QR iteration.
 * @param a n x n, row-major; left as it is
 * @returns undefined where the iteration does not settle, or the matrix holds what is no number
 * @see J.G.F. Francis, Computer J. 4 (1961) 265-271, 332-345; G.H. Golub, C.F. Van Loan, Matrix Computations, ch. 7
 */
export function eigenvalues(a: Float64Array, n: number): Eigenvalues | undefined {
  if (!a.every(Number.isFinite)) return undefined;
  const h = a.slice();
  toHessenberg(h, n);
  const [real, imaginary] = [new Float64Array(n), new Float64Array(n)];
  return francis(h, n, real, imaginary) ? { real, imaginary } : undefined;
}

/** Zeros below the first subdiagonal, by similarity. */
function toHessenberg(h: Float64Array, n: number): void {
  const v = new Float64Array(n);
  for (let k = 0; k + 2 < n; k++) {
    let norm = 0;
    for (let i = k + 1; i < n; i++) norm = Math.hypot(norm, h[i * n + k]);
    if (norm === 0) continue;
    const alpha = h[(k + 1) * n + k] > 0 ? -norm : norm;
    let squares = 0;
    for (let i = k + 1; i < n; i++) {
      v[i] = h[i * n + k] - (i === k + 1 ? alpha : 0);
      squares += v[i] * v[i];
    }
    if (squares === 0) continue;
    for (let j = k; j < n; j++) {
      let dot = 0;
      for (let i = k + 1; i < n; i++) dot += v[i] * h[i * n + j];
      for (let i = k + 1; i < n; i++) h[i * n + j] -= (2 * dot * v[i]) / squares;
    }
    for (let i = 0; i < n; i++) {
      let dot = 0;
      for (let j = k + 1; j < n; j++) dot += h[i * n + j] * v[j];
      for (let j = k + 1; j < n; j++) h[i * n + j] -= (2 * dot * v[j]) / squares;
    }
    for (let i = k + 2; i < n; i++) h[i * n + k] = 0;
  }
}

/** Deflates one or two eigenvalues at a time from the lower end of a Hessenberg matrix. */
function francis(h: Float64Array, n: number, real: Float64Array, imaginary: Float64Array): boolean {
  let size = 0;
  for (const x of h) size += Math.abs(x);
  let end = n - 1;
  let sweeps = 0;
  while (end >= 0) {
    const start = unreduced(h, n, end, size);
    if (start === end) {
      real[end] = h[end * n + end];
      imaginary[end] = 0;
      end--;
      sweeps = 0;
    } else if (start === end - 1) {
      pair(h, n, end, real, imaginary);
      end -= 2;
      sweeps = 0;
    } else {
      if (sweeps++ >= mostSweeps) return false;
      sweep(h, n, start, end, sweeps % 10 === 0);
    }
  }
  return true;
}

/** Where the block that ends at `end` begins; a subdiagonal that no longer matters is set to zero. */
function unreduced(h: Float64Array, n: number, end: number, size: number): number {
  let l = end;
  for (; l > 0; l--) {
    const beside = Math.abs(h[(l - 1) * n + l - 1]) + Math.abs(h[l * n + l]);
    if (Math.abs(h[l * n + l - 1]) <= Number.EPSILON * Math.max(beside, Number.EPSILON * size)) {
      h[l * n + l - 1] = 0;
      break;
    }
  }
  return l;
}

/** The two eigenvalues of the block at the end. */
function pair(h: Float64Array, n: number, end: number, real: Float64Array, imaginary: Float64Array): void {
  const [a, b, c, d] = [h[(end - 1) * n + end - 1], h[(end - 1) * n + end], h[end * n + end - 1], h[end * n + end]];
  const half = (a - d) / 2;
  const under = half * half + b * c;
  if (under >= 0) {
    const z = half + (half >= 0 ? Math.sqrt(under) : -Math.sqrt(under));
    real[end - 1] = d + z;
    real[end] = z === 0 ? d : d - (b * c) / z;
    imaginary[end - 1] = 0;
    imaginary[end] = 0;
  } else {
    const middle = (a + d) / 2;
    const way = Math.sqrt(-under);
    real.fill(middle, end - 1, end + 1);
    imaginary[end - 1] = way;
    imaginary[end] = -way;
  }
}

/** One implicit double-shift QR step on rows and columns `start` to `end`. */
function sweep(h: Float64Array, n: number, start: number, end: number, unusual: boolean): void {
  const at = (i: number, j: number): number => h[i * n + j];
  let trace = at(end - 1, end - 1) + at(end, end);
  let determinant = at(end - 1, end - 1) * at(end, end) - at(end - 1, end) * at(end, end - 1);
  if (unusual) {
    const s = Math.abs(at(end, end - 1)) + Math.abs(at(end - 1, end - 2));
    trace = 1.5 * s;
    determinant = s * s;
  }
  let x =
    at(start, start) * at(start, start) +
    at(start, start + 1) * at(start + 1, start) -
    trace * at(start, start) +
    determinant;
  let y = at(start + 1, start) * (at(start, start) + at(start + 1, start + 1) - trace);
  let z = start + 2 <= end ? at(start + 1, start) * at(start + 2, start + 1) : 0;
  for (let k = start; k < end; k++) {
    const three = k + 2 <= end;
    reflect(h, n, { k, first: Math.max(k - 1, start), start, end, three }, x, y, three ? z : 0);
    x = at(k + 1, k);
    y = k + 2 <= end ? at(k + 2, k) : 0;
    z = k + 3 <= end ? at(k + 3, k) : 0;
    if (k > start) {
      h[(k + 1) * n + k - 1] = 0;
      if (three) h[(k + 2) * n + k - 1] = 0;
    }
  }
}

interface Place {
  readonly k: number;
  readonly first: number;
  readonly start: number;
  readonly end: number;
  readonly three: boolean;
}

/** Applies to rows and columns k, k + 1 (and k + 2) the reflection that turns (x, y, z) onto the first axis. */
function reflect(h: Float64Array, n: number, place: Place, x: number, y: number, z: number): void {
  const { k, first, start, end, three } = place;
  const norm = Math.hypot(x, y, z);
  if (norm === 0) return;
  const v0 = x + (x > 0 ? norm : -norm);
  const squares = v0 * v0 + y * y + z * z;
  if (squares === 0) return;
  const [r0, r1, r2] = [k * n, (k + 1) * n, (k + 2) * n];
  for (let j = first; j <= end; j++) {
    const dot = (2 * (v0 * h[r0 + j] + y * h[r1 + j] + (three ? z * h[r2 + j] : 0))) / squares;
    h[r0 + j] -= dot * v0;
    h[r1 + j] -= dot * y;
    if (three) h[r2 + j] -= dot * z;
  }
  const last = Math.min(k + 3, end);
  for (let i = start; i <= last; i++) {
    const row = i * n + k;
    const dot = (2 * (v0 * h[row] + y * h[row + 1] + (three ? z * h[row + 2] : 0))) / squares;
    h[row] -= dot * v0;
    h[row + 1] -= dot * y;
    if (three) h[row + 2] -= dot * z;
  }
}
