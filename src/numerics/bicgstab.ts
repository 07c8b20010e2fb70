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
        turn(p, r, v, beta, omega);
        const ahead = preconditioner ? y : p;
        if (preconditioner) {
          y.set(p);
          preconditioner.apply(y);
        }
        multiply(ahead, v);
        alpha = rho / dot(shadow, v);
        if (!Number.isFinite(alpha)) break;
        products++;
        if (advance(x, alpha, ahead, r, v) <= wanted) break;
        const aside = preconditioner ? z : r;
        if (preconditioner) {
          z.set(r);
          preconditioner.apply(z);
        }
        multiply(aside, t);
        products++;
        omega = dot(t, r) / dot(t, t);
        if (!(Math.abs(omega) > 0)) break;
        if (advance(x, omega, aside, r, t) <= wanted) break;
      }
      if (rough && norm(r) <= wanted) return { reached: true, residual: norm(r) / size, products };
    }
    return { reached: false, residual: left / size, products };
  };
}

/** The next direction: p <- r + beta (p - omega v). Loops stand in functions of their own, where they are compiled best. */
function turn(p: Float64Array, r: Float64Array, v: Float64Array, beta: number, omega: number): void {
  for (let i = 0; i < p.length; i++) p[i] = r[i] + beta * (p[i] - omega * v[i]);
}

/** x += step way, r -= step moved; returns the norm of r. */
function advance(x: Float64Array, step: number, way: Float64Array, r: Float64Array, moved: Float64Array): number {
  let squares = 0;
  for (let i = 0; i < r.length; i++) {
    x[i] += step * way[i];
    const rest = r[i] - step * moved[i];
    r[i] = rest;
    squares += rest * rest;
  }
  return Math.sqrt(squares);
}
