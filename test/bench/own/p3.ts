import { parseChemistry, parseDuty, steadyState } from "../../../src/index.js";
import { latticePlant, repeated, wanted } from "./load.js";

const chemistryText = `chemistry: Two consecutive reactions
format: 1
species: {A: {}, B: {}, R: {}, S: {}}
constants: {k1: 2 L/mol/min, k2: 0.5 L/mol/min}
reactions:
  - {equation: A + B -> R, rate: k1 * A * B}
  - {equation: R + B -> S, rate: k2 * R * B}
`;
const dutyText = `duty: Normal
format: 1
chemistry: chemistry.yaml
feeds: {feed: {A: 1 mol/L, B: 1.2 mol/L}}
temperature: 25 degC
report: [conversion of A]
`;

/** The steady state in a lattice: folder. */
export function p3([folder]: string[]): Record<string, unknown> {
  const { plant, seconds } = latticePlant(folder);
  const chemistry = wanted(parseChemistry(chemistryText, { path: "chemistry.yaml" }));
  const duty = wanted(parseDuty(dutyText, { path: "duty.yaml", read: () => chemistryText }));
  const { first, again, result } = repeated(() => steadyState(plant, chemistry, duty));
  const [outlet] = result.outlets;
  const [a, , r] = result.species.map((name) => outlet.concentrations[result.species.indexOf(name)]);
  const fed = result.fed[result.species.indexOf("A")] / outlet.flow;
  return {
    read_s: seconds,
    first_s: first,
    solve_s: again,
    conversion_A: 1 - a / fed,
    yield_R: r / fed,
    closure: Math.max(...result.closure.map(Math.abs)),
    converged: result.converged,
  };
}
