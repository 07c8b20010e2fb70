import { dot, type IterativeMethod, type IterativeProblem, norm } from "./krylov.js";

/**
 * BiCGStab, preconditioned from the right, begun anew from the true residual where it breaks down or its own residual
 * has drifted from the true one.
 * @see H.A. van der Vorst, SIAM J. Sci. Stat. Comput. 13 (1992) 631-644
 */
export function bicgstab({ size: n, multiply, preconditioner }: IterativeProblem): IterativeMethod {
  const [r, shadow, p, v, t, y, z] = Array.from({ length: 7 }, () => new Float64Array(n));
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
        for (let i = 0; i < n; i++) p[i] = r[i] + beta * (p[i] - omega * v[i]);
        const ahead = preconditioner ? y : p;
        if (preconditioner) {
          y.set(p);
          preconditioner.apply(y);
        }
        multiply(ahead, v);
        alpha = rho / dot(shadow, v);
        if (!Number.isFinite(alpha)) break;
        let squares = 0;
        for (let i = 0; i < n; i++) {
          x[i] += alpha * ahead[i];
          const rest = r[i] - alpha * v[i];
          r[i] = rest;
          squares += rest * rest;
        }
        products++;
        if (Math.sqrt(squares) <= wanted) break;
        const aside = preconditioner ? z : r;
        if (preconditioner) {
          z.set(r);
          preconditioner.apply(z);
        }
        multiply(aside, t);
        products++;
        let [along, long] = [0, 0];
        for (let i = 0; i < n; i++) {
          along += t[i] * r[i];
          long += t[i] * t[i];
        }
        omega = along / long;
        if (!(Math.abs(omega) > 0)) break;
        squares = 0;
        for (let i = 0; i < n; i++) {
          x[i] += omega * aside[i];
          const rest = r[i] - omega * t[i];
          r[i] = rest;
          squares += rest * rest;
        }
        if (Math.sqrt(squares) <= wanted) break;
      }
      if (rough && norm(r) <= wanted) return { reached: true, residual: norm(r) / size, products };
    }
    return { reached: false, residual: left / size, products };
  };
}
