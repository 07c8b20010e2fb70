import { block } from "./block-matrix.js";
import type { Kinetics } from "./kinetics.js";
import { solveNewton } from "./newton.js";

/**
 * The steady state of one mixed body: entering - y + tau R(y) = 0, tau in s.
 * @param y start, scaled; the state is written over it
 * @returns false where it did not converge
 */
export function settleMixed(kinetics: Kinetics, entering: ArrayLike<number>, tau: number, y: Float64Array): boolean {
  const n = kinetics.size;
  const slope = new Float64Array(n * n);
  return solveNewton(
    {
      count: 1,
      size: n,
      memory: Float64Array.of(tau),
      residual(at, f) {
        kinetics.production(at, 0, f, 0);
        for (let i = 0; i < n; i++) f[i] = entering[i] - at[i] + tau * f[i];
        return true;
      },
      jacobian(at, m) {
        kinetics.jacobian(at, 0, slope, 0);
        const d = block(m, 0, 0);
        for (let e = 0; e < n * n; e++) d[e] += tau * slope[e];
        for (let i = 0; i < n; i++) d[i * n + i] -= 1;
        return true;
      },
    },
    y,
  ).converged;
}
