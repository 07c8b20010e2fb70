import type { Plant } from "../compile/plant.js";
import { gainColumns } from "../transfer/gain.js";
import { SteadyEquations } from "../transfer/steady-equations.js";

/**
 * Mean age of what leaves every node, s: the time since it entered the vessel, all feeds together. Exact for every kind and
 * any size, by one solve; infinite behind a body whose mean is. NaN where nothing arrives.
 * @see D.B. Spalding, Chem. Eng. Sci. 9 (1958) 74-77 (mean age as a balance of its own)
 */
export const meanAges = (plant: Plant): Float64Array => meanTimes(plant, false);

/** Mean time that what enters every node has yet to spend in the vessel, s: its life expectancy, by the adjoint balance. */
export const meanLives = (plant: Plant): Float64Array => meanTimes(plant, true);

function meanTimes(plant: Plant, backward: boolean): Float64Array {
  const { inflow } = plant.columns;
  const times = gainColumns(plant)[1].map((g) => -g);
  const solved = new SteadyEquations(plant, backward).solve(times);
  return times.map((t, i) => (solved && inflow[i] > 0 ? t : Number.NaN));
}
