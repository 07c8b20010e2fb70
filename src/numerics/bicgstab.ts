import type { IterativeMethod, IterativeProblem } from "./krylov.js";
import { plainVectors } from "./vectors.js";

/**
 * BiCGStab, preconditioned from the right, begun anew from the true residual where it breaks down or its own residual
 * has drifted from the true one.
 * @see H.A. van der Vorst, SIAM J. Sci. Stat. Comput. 13 (1992) 631-644
 */
export function bicgstab(problem: IterativeProblem): IterativeMethod {
  const { size: n, multiply, preconditioner, vectors = plainVectors(n) } = problem;
  const { dot, turn, advance } = vectors;
  const [r, shadow, p, v, t] = Array.from({ length: 5 }, vectors.make);
  const [y, z] = preconditioner ? [vectors.make(), vectors.make()] : [p, r];
  const norm = (x: Float64Array): number => Math.sqrt(dot(x, x));
  return (b, x, { relative, most, rough }) => {
    const size = norm(b);
    const wanted = relative * size;
    let products = 0;
    let left = Number.POSITIVE_INFINITY;
    for (let attempt = 0; attempt < 30; attempt++) {
      if (rough && attempt === 0) r.set(b);
      else {
        multiply(x, v);
        products++;
        for (let i = 0; i < n; i++) r[i] = b[i] - v[i];
      }
      const before = left;
      left = norm(r);
      if (left <= wanted) return { reached: true, residual: size > 0 ? left / size : 0, products };
      if (!(left < before / 2) || products >= most) break;
      shadow.set(r);
      p.fill(0);
      v.fill(0);
      let [rho, alpha, omega] = [1, 1, 1];
      while (products < most) {
        const next = dot(shadow, r);
        const beta = (next / rho) * (alpha / omega);
        if (!(Math.abs(next) > 0) || !Number.isFinite(beta)) break;
        rho = next;
        turn(p, r, v, beta, omega);
        if (preconditioner) {
          y.set(p);
          preconditioner.apply(y);
        }
        multiply(y, v);
        alpha = rho / dot(shadow, v);
        if (!Number.isFinite(alpha)) break;
        products++;
        if (advance(x, alpha, y, r, v) <= wanted) break;
        if (preconditioner) {
          z.set(r);
          preconditioner.apply(z);
        }
        multiply(z, t);
        products++;
        omega = dot(t, r) / dot(t, t);
        if (!(Math.abs(omega) > 0)) break;
        if (advance(x, omega, z, r, t) <= wanted) break;
      }
      if (rough && norm(r) <= wanted) return { reached: true, residual: norm(r) / size, products };
    }
    return { reached: false, residual: left / size, products };
  };
}
