/** What BiCGStab needs of a matrix and of something near its inverse; both write into the second array. */
export interface Operator {
  readonly size: number;
  apply(x: Float64Array, y: Float64Array): void;
  precondition(r: Float64Array, z: Float64Array): void;
}

/** Seven vectors, made once. */
export type BicgstabSpace = readonly Float64Array[];

export const bicgstabSpace = (size: number): BicgstabSpace => Array.from({ length: 7 }, () => new Float64Array(size));

/**
 * Solves A x = b from x = 0 until the residual's norm is `tolerance` times that of b, or it gets no further.
 * @returns the residual's norm reached, relative to that of b; NaN where the method broke down
 * @see H.A. van der Vorst, SIAM J. Sci. Stat. Comput. 13 (1992) 631-644
 */
export function bicgstab(
  { size: n, apply, precondition }: Operator,
  b: Float64Array,
  x: Float64Array,
  tolerance: number,
  mostSteps: number,
  space: BicgstabSpace,
): number {
  const [r, shadow, p, v, s, t, z] = space;
  x.fill(0);
  r.set(b);
  shadow.set(b);
  p.fill(0);
  v.fill(0);
  const size = norm(b);
  if (size === 0) return 0;
  let [rho, alpha, omega] = [1, 1, 1];
  for (let step = 0; step < mostSteps; step++) {
    const next = dot(shadow, r);
    const beta = (next / rho) * (alpha / omega);
    rho = next;
    for (let i = 0; i < n; i++) p[i] = r[i] + beta * (p[i] - omega * v[i]);
    precondition(p, z);
    apply(z, v);
    alpha = rho / dot(shadow, v);
    if (!Number.isFinite(alpha)) return Number.NaN;
    for (let i = 0; i < n; i++) {
      x[i] += alpha * z[i];
      s[i] = r[i] - alpha * v[i];
    }
    if (norm(s) <= tolerance * size) return norm(s) / size;
    precondition(s, z);
    apply(z, t);
    omega = dot(t, s) / dot(t, t);
    if (!Number.isFinite(omega) || omega === 0) return Number.NaN;
    for (let i = 0; i < n; i++) {
      x[i] += omega * z[i];
      r[i] = s[i] - omega * t[i];
    }
    if (norm(r) <= tolerance * size) return norm(r) / size;
  }
  return norm(r) / size;
}

const norm = (x: Float64Array): number => Math.sqrt(dot(x, x));

function dot(x: Float64Array, y: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < x.length; i++) sum += x[i] * y[i];
  return sum;
}
