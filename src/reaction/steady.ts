import { requireCarried } from "../compile/carried.js";
import type { Plant } from "../compile/plant.js";
import type { Chemistry } from "../model/chemistry.js";
import type { Duty } from "../model/duty.js";
import { conditionsOf, type DutySettings } from "./conditions.js";
import { type SteadyState, summary } from "./summary.js";
import { type SteadyProgress, Walk } from "./walk.js";

export type { Port } from "./settled.js";
export type { SteadyState } from "./summary.js";

/**
 * The steady state of a chemistry in a plant of any kinds of compartments: node after node downstream along the flow. What is
 * segregated or flows along a body (`tubular`, `laminar`, `cascade`) is followed as parcels, `dispersed` as a boundary-value
 * problem; pockets react beside the flow that passes them. Where nodes feed one another they are solved together by Newton's
 * method with exact derivatives: up to 200 by elimination, more by iteration (BiCGStab behind an incomplete LU in flow order).
 *
 * Balances hold to about 1e-11 of each concentration; of a `dispersed` body in which a reactant runs out, to 1e-7. With a
 * chemistry that has several steady states this finds the one that the unreacted mixture, or what the duty's `contents` say is
 * inside, runs into. What did not
 * converge is said in the result (`converged`, `worst`), which then holds the best found.
 *
 * Concentrations are SI (mol/m3, kg/m3 or 1/m3, as the duty feeds them), node by node: those that leave compartment `bulk` are
 * `concentrations[plant.exit.get("bulk") * species.length + i]`.
 * @param chemistry undefined: the feeds only mix
 * @param settings values in place of the duty's (`DutySettings`), SI
 * @param progress told now and then how far many nodes that feed one another have come
 * @throws RefusedError where the plant is larger than this version solves
 * @see the methods beside their code in `src/reaction` and `src/numerics`
 */
export function steadyState(
  plant: Plant,
  chemistry: Chemistry | undefined,
  duty: Duty,
  settings: DutySettings = {},
  progress?: (solved: SteadyProgress) => void,
): SteadyState {
  requireCarried(plant, "reaction");
  const conditions = conditionsOf(plant, chemistry, duty, settings);
  const walk = new Walk(plant, conditions, progress);
  for (const group of walk.groups) walk.pass(group);
  return summary(plant, conditions, walk);
}
