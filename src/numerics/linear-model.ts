import { applyTransposedQ, entryOfR, factorQr } from "./qr.js";

/** A linear least-squares model of the residuals about p, compressed to n rows: |c + R s| for a step s. */
export interface LinearModel {
  readonly n: number;
  /** n x n, row-major. */
  readonly r: Float64Array;
  /** First n entries of Q' residuals. */
  readonly c: Float64Array;
}

/** R and Q' residuals of the Jacobian, R in the order of its columns. */
export function compress(jacobian: Float64Array, residuals: Float64Array, n: number): LinearModel {
  const m = residuals.length;
  const qr = factorQr(jacobian, m, n);
  const rotated = residuals.slice();
  applyTransposedQ(qr, rotated);
  const r = new Float64Array(n * n);
  const c = new Float64Array(n);
  for (let i = 0; i < Math.min(m, n); i++) {
    c[i] = rotated[i];
    for (let j = i; j < n; j++) r[i * n + qr.columns[j]] = entryOfR(qr, i, j);
  }
  return { n, r, c };
}

/** R' c, the gradient of half the sum of squares. */
export function gradient({ n, r, c }: LinearModel): Float64Array {
  const g = new Float64Array(n);
  for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) g[j] += r[i * n + j] * c[i];
  return g;
}

/** |c|^2 - |c + R s|^2, without cancellation. */
export function promised({ n, r, c }: LinearModel, s: Float64Array): number {
  let fall = 0;
  for (let i = 0; i < n; i++) {
    let w = 0;
    for (let j = 0; j < n; j++) w += r[i * n + j] * s[j];
    fall -= w * (2 * c[i] + w);
  }
  return fall;
}

/** Largest cosine between the residuals and a column that may move: 0 at an optimum. */
export function slope(model: LinearModel, free: readonly number[], sum: number): number {
  const g = gradient(model);
  let largest = 0;
  for (const j of free) {
    const norm = columnNorm(model, j);
    if (norm > 0 && sum > 0) largest = Math.max(largest, Math.abs(g[j]) / norm / Math.sqrt(sum));
  }
  return largest;
}

/** Length of a column of the Jacobian. */
export function columnNorm({ n, r }: LinearModel, j: number): number {
  let sum = 0;
  for (let i = 0; i < n; i++) sum += r[i * n + j] ** 2;
  return Math.sqrt(sum);
}
