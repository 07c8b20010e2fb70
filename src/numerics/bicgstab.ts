import { dot, type IterativeMethod, type IterativeProblem, norm } from "./krylov.js";

/**
 * BiCGStab, preconditioned from the right, begun anew from the true residual where it breaks down or its own residual
 * has drifted from the true one.
 * @see H.A. van der Vorst, SIAM J. Sci. Stat. Comput. 13 (1992) 631-644
 */
export function bicgstab({ size: n, multiply, preconditioner }: IterativeProblem): IterativeMethod {
  const [r, shadow, p, v, t, y, z] = Array.from({ length: 7 }, () => new Float64Array(n));
  return (b, x, { relative, most }) => {
    const size = norm(b);
    const wanted = relative * size;
    let products = 0;
    let left = Number.POSITIVE_INFINITY;
    for (let attempt = 0; attempt < 30; attempt++) {
      multiply(x, v);
      products++;
      for (let i = 0; i < n; i++) r[i] = b[i] - v[i];
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
        for (let i = 0; i < n; i++) p[i] = r[i] + beta * (p[i] - omega * v[i]);
        y.set(p);
        preconditioner?.apply(y);
        multiply(y, v);
        alpha = rho / dot(shadow, v);
        if (!Number.isFinite(alpha)) break;
        for (let i = 0; i < n; i++) {
          x[i] += alpha * y[i];
          r[i] -= alpha * v[i];
        }
        products++;
        if (norm(r) <= wanted) break;
        z.set(r);
        preconditioner?.apply(z);
        multiply(z, t);
        products++;
        omega = dot(t, r) / dot(t, t);
        if (!(Math.abs(omega) > 0)) break;
        for (let i = 0; i < n; i++) {
          x[i] += omega * z[i];
          r[i] -= omega * t[i];
        }
        if (norm(r) <= wanted) break;
      }
    }
    return { reached: false, residual: left / size, products };
  };
}
