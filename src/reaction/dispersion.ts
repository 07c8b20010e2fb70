import { type BoundaryProblem, solveBoundary } from "../numerics/boundary-value.js";
import type { CollocationMesh } from "../numerics/collocation.js";
import { dispersionInCells } from "./dispersion-cells.js";
import { firstProfile } from "./dispersion-start.js";
import type { Kinetics } from "./kinetics.js";

/** Carries a mixture through a body; outlet and sensitivity as `passTube` gives them. */
export type Pass = (y: Float64Array, sensitivity?: Float64Array) => boolean;

/**
 * Axial dispersion with reaction between closed ends: c''/Pe - c' + R(c) = 0, c - c'/Pe = entering at 0, c' = 0 at 1, solved
 * as c' = Pe (c - J), J' = R(c), so that what the flux J loses is what reacted. Every call starts from the last profile.
 * Where collocation does not get there (a reactant runs out on the way, a fast equilibrium), by mixed cells.
 * @param kinetics per unit of the way
 * @see P.V. Danckwerts, Chem. Eng. Sci. 2 (1953) 1-13; J.F. Wehner, R.H. Wilhelm, ibid. 6 (1956) 89-93
 */
export function dispersedPass(kinetics: Kinetics, peclet: number): Pass {
  const n = kinetics.size;
  const fed = new Float64Array(n);
  const problem = fluxProblem(kinetics, peclet, fed);
  let last: CollocationMesh | undefined;
  return (y, sensitivity) => {
    fed.set(y);
    let solution = last && solveBoundary(problem, last);
    if (!solution) {
      const guess = firstProfile(kinetics, peclet, fed);
      solution = guess && solveBoundary(problem, guess);
    }
    last = solution?.mesh;
    if (!solution) return dispersionInCells(kinetics, peclet, y, sensitivity);
    for (let i = 0; i < n; i++) y[i] = Math.max(solution.end[i], 0);
    if (!sensitivity) return true;
    const moved = solution.sensitivity();
    if (moved) sensitivity.set(moved.subarray(0, n * n));
    return moved !== undefined;
  };
}

/** The state is c and then J, by species. */
export function fluxProblem(kinetics: Kinetics, peclet: number, fed: Float64Array): BoundaryProblem {
  const n = kinetics.size;
  const m = 2 * n;
  const left = new Float64Array(n * m);
  const right = new Float64Array(n * m);
  for (let i = 0; i < n; i++) {
    left[i * m + n + i] = 1;
    right[i * m + i] = -1;
    right[i * m + n + i] = 1;
  }
  const slope = new Float64Array(n * n);
  return {
    size: m,
    left,
    fed,
    right,
    positive: n,
    rhs(y, at, out, to) {
      for (let i = 0; i < n; i++) out[to + i] = peclet * (y[at + i] - y[at + n + i]);
      kinetics.production(y, at, out, to + n);
    },
    jacobian(y, at, out, to) {
      out.fill(0, to, to + m * m);
      kinetics.jacobian(y, at, slope, 0);
      for (let i = 0; i < n; i++) {
        out[to + i * m + i] = peclet;
        out[to + i * m + n + i] = -peclet;
        for (let j = 0; j < n; j++) out[to + (n + i) * m + j] = slope[i * n + j];
      }
    },
  };
}
