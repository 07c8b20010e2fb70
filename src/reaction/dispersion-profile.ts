import { solveBoundary } from "../numerics/boundary-value.js";
import { valueAt } from "../numerics/collocation.js";
import { fluxProblem } from "./dispersion.js";
import { cellsInRow } from "./dispersion-cells.js";
import { firstProfile } from "./dispersion-start.js";
import type { Kinetics } from "./kinetics.js";
import { solveNewton } from "./newton.js";

/** Cells of the row that stands in where collocation does not converge: to about 1e-4 of what there is. */
const cells = 1600;

/**
 * The mixture at places along a body with axial dispersion between closed ends, scaled. It begins below what enters:
 * at the inlet the liquid behind mixes in.
 * @param kinetics per unit of the way
 * @param fed what enters, scaled
 * @param places 0 to 1, ascending
 */
export function dispersedProfile(
  kinetics: Kinetics,
  peclet: number,
  fed: Float64Array,
  places: Float64Array,
): readonly Float64Array[] | undefined {
  const n = kinetics.size;
  const guess = firstProfile(kinetics, peclet, fed);
  const solution = guess && solveBoundary(fluxProblem(kinetics, peclet, fed), guess);
  if (solution) return Array.from(places, (x) => valueAt(solution.mesh, 2 * n, x).slice(0, n));
  const state = new Float64Array(cells * n);
  for (let k = 0; k < cells; k++) state.set(fed, k * n);
  if (!solveNewton(cellsInRow(kinetics, peclet, fed, cells), state).converged) return undefined;
  return Array.from(places, (x) => {
    const at = Math.min(cells - 1, Math.max(0, Math.round(x * cells - 0.5)));
    return state.slice(at * n, at * n + n);
  });
}
