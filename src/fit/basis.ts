/** Orthonormal columns that span the same, by Gram-Schmidt run twice; dependent ones are left out. Those of `from` come first. */
export function orthonormalBasis(columns: readonly Float64Array[], from: readonly Float64Array[] = []): Float64Array[] {
  const basis = [...from];
  for (const c of columns) {
    const q = Float64Array.from(c);
    const before = norm(c);
    for (let pass = 0; pass < 2; pass++) {
      for (const b of basis) {
        const share = dot(b, q);
        for (let i = 0; i < q.length; i++) q[i] -= share * b[i];
      }
    }
    const left = norm(q);
    if (!(left > 1e-6 * before)) continue;
    for (let i = 0; i < q.length; i++) q[i] /= left;
    basis.push(q);
  }
  return basis;
}

export function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}

export const norm = (v: Float64Array): number => Math.sqrt(dot(v, v));
