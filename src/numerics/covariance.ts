import { factorQr, inverseOfNormal } from "./qr.js";
import { svd } from "./svd.js";

/**
 * Covariance of the estimates, s^2 (J'J)^-1, through QR of the column-scaled Jacobian.
 *
 * @param jacobian m x n, row-major
 * @param free     the parameters estimated; rows and columns of the others are NaN (they lie on a bound: no standard error)
 * @param variance of one residual
 * @returns n x n, row-major. Where the data cannot tell parameters apart, the variances of those involved are Infinity and their
 *          covariances NaN; the others keep theirs
 */
export function covarianceOf(
  jacobian: Float64Array,
  m: number,
  n: number,
  free: readonly number[],
  variance: number,
): Float64Array {
  const k = free.length;
  const covariance = new Float64Array(n * n).fill(Number.NaN);
  if (k === 0) return covariance;
  const size = free.map((j) => {
    let sum = 0;
    for (let i = 0; i < m; i++) sum += jacobian[i * n + j] ** 2;
    return Math.sqrt(sum) || 1;
  });
  const scaled = new Float64Array(Math.max(m, k) * k); // rows of zeros where there are fewer residuals than parameters
  for (let i = 0; i < m; i++) for (let a = 0; a < k; a++) scaled[i * k + a] = jacobian[i * n + free[a]] / size[a];
  const qr = factorQr(scaled, Math.max(m, k), k, 1e-11);
  const inverse = inverseOfNormal(qr);
  const normal = inverse === "singular" ? inverseOnRange(scaled, Math.max(m, k), k) : inverse;
  for (let a = 0; a < k; a++) {
    for (let b = 0; b < k; b++) {
      covariance[free[a] * n + free[b]] = (variance * normal[a * k + b]) / (size[a] * size[b]);
    }
  }
  return covariance;
}

/** Like the inverse of A'A, but infinite for every parameter that a null direction of A moves. */
function inverseOnRange(a: Float64Array, m: number, k: number): Float64Array {
  const { singular, v } = svd(a, m, k);
  const lost = new Array<boolean>(k).fill(false);
  const normal = new Float64Array(k * k);
  for (let j = 0; j < k; j++) {
    const seen = singular[j] > 1e-11 * singular[0];
    for (let p = 0; p < k; p++) {
      if (!seen && Math.abs(v[p * k + j]) > 1e-6) lost[p] = true;
      if (seen) for (let q = 0; q < k; q++) normal[p * k + q] += (v[p * k + j] * v[q * k + j]) / singular[j] ** 2;
    }
  }
  for (let p = 0; p < k; p++) {
    for (let q = 0; q < k; q++) {
      if (lost[p] || lost[q]) normal[p * k + q] = p === q ? Number.POSITIVE_INFINITY : Number.NaN;
    }
  }
  return normal;
}
