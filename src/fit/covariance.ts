import { entryOfR, factorColumns, type Qr } from "../numerics/qr.js";
import { dot, norm } from "./basis.js";

/** Linear theory of a least-squares optimum. */
export interface LinearTheory {
  /** (J'J)^-1 of the estimable unknowns, n x n row-major; NaN in rows and columns of those that are not. */
  readonly inverse: Float64Array;
  readonly n: number;
  readonly rank: number;
  readonly estimable: readonly boolean[];
  /** Combinations that leave the fitted curve as it is, one vector per lost rank, in shares of the columns' lengths. */
  readonly blind: readonly Float64Array[];
  /** Change of the unknowns when the fitted curve is moved by `shift` (weighted, one per row): -J^+ shift. */
  respond(shift: Float64Array): Float64Array;
}

/**
 * Covariance factor, rank and blind combinations by QR with column pivoting on columns scaled to length 1; never by
 * normal equations (Golub & Van Loan, Matrix Computations, 4th ed. 2013, sections 5.4 and 5.5; estimable functions: Searle,
 * Linear Models, 1971, section 5.4).
 * @param columns    Jacobian by columns, all of one length
 * @param nothing    length up to which a column is rounding, column by column; default 0
 * @param basis      orthonormal columns that span them: what is factored are then their shares in these, as many rows as there are
 * @param tolerance  a column that others reproduce to this fraction of its length counts as dependent; it must lie above the
 *                   error of the differences that made the columns
 */
export function linearTheory(
  columns: readonly Float64Array[],
  nothing: ArrayLike<number> = [],
  basis?: readonly Float64Array[],
  tolerance = 1e-6,
): LinearTheory {
  const n = columns.length;
  const m = basis ? basis.length : (columns[0]?.length ?? 0);
  const length = Float64Array.from(columns, (c, j) => {
    const whole = norm(c);
    return whole > (nothing[j] ?? 0) ? whole : 0;
  });
  const scaled = new Float64Array(m * n);
  for (let j = 0; j < n; j++) {
    if (length[j] === 0) continue;
    if (basis) for (let i = 0; i < m; i++) scaled[j * m + i] = dot(basis[i], columns[j]) / length[j];
    else for (let i = 0; i < m; i++) scaled[j * m + i] = columns[j][i] / length[j];
  }
  const qr = factorColumns(scaled, m, n, tolerance);
  const unscale = length.map((l) => (l > 0 ? 1 / l : 1));
  const blind = blindVectors(qr, n);
  const estimable = columns.map((_, j) => blind.every((v) => Math.abs(v[j]) < 1e-3));
  const rInverse = inverseOfR(qr);
  const inverse = new Float64Array(n * n).fill(Number.NaN);
  for (let a = 0; a < qr.rank; a++) {
    for (let b = a; b < qr.rank; b++) {
      const [i, j] = [qr.columns[a], qr.columns[b]];
      if (!estimable[i] || !estimable[j]) continue;
      let sum = 0;
      for (let k = b; k < qr.rank; k++) sum += rInverse[a * qr.rank + k] * rInverse[b * qr.rank + k];
      inverse[i * n + j] = inverse[j * n + i] = sum * unscale[i] * unscale[j];
    }
  }
  const respond = (shift: Float64Array): Float64Array => answer(columns, length, qr, rInverse, shift);
  return { inverse, n, rank: qr.rank, estimable, blind, respond };
}

/** Null space of the scaled Jacobian: each dependent column against the independent ones. */
function blindVectors(qr: Qr, n: number): Float64Array[] {
  const vectors: Float64Array[] = [];
  for (let d = qr.rank; d < n; d++) {
    const v = new Float64Array(n);
    v[qr.columns[d]] = 1;
    for (let i = qr.rank - 1; i >= 0; i--) {
      let sum = -entryOfR(qr, i, d);
      for (let j = i + 1; j < qr.rank; j++) sum -= entryOfR(qr, i, j) * v[qr.columns[j]];
      v[qr.columns[i]] = sum / entryOfR(qr, i, i);
    }
    vectors.push(v);
  }
  return vectors;
}

/** Inverse of the leading rank x rank block of R, row-major. */
function inverseOfR(qr: Qr): Float64Array {
  const r = qr.rank;
  const inverse = new Float64Array(r * r);
  for (let j = 0; j < r; j++) {
    inverse[j * r + j] = 1 / entryOfR(qr, j, j);
    for (let i = j - 1; i >= 0; i--) {
      let sum = 0;
      for (let k = i + 1; k <= j; k++) sum -= entryOfR(qr, i, k) * inverse[k * r + j];
      inverse[i * r + j] = sum / entryOfR(qr, i, i);
    }
  }
  return inverse;
}

/** -J^+ shift by the semi-normal equations R'R z = J' shift on the independent columns, corrected once. */
function answer(
  columns: readonly Float64Array[],
  length: Float64Array,
  qr: Qr,
  rInverse: Float64Array,
  shift: Float64Array,
): Float64Array {
  const r = qr.rank;
  const z = new Float64Array(columns.length);
  const left = Float64Array.from(shift);
  for (let pass = 0; pass < 2; pass++) {
    const g = new Float64Array(r);
    for (let a = 0; a < r; a++) {
      const j = qr.columns[a];
      for (let i = 0; i < left.length; i++) g[a] += (columns[j][i] / length[j]) * left[i];
    }
    const w = new Float64Array(r);
    for (let a = 0; a < r; a++) for (let k = 0; k <= a; k++) w[a] += rInverse[k * r + a] * g[k];
    for (let a = 0; a < r; a++) {
      let step = 0;
      for (let k = a; k < r; k++) step += rInverse[a * r + k] * w[k];
      const j = qr.columns[a];
      z[j] -= step / length[j];
      for (let i = 0; i < left.length; i++) left[i] -= (columns[j][i] * step) / length[j];
    }
  }
  return z;
}
