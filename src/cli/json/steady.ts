import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import type { SteadyState } from "../../reaction/steady.js";
import { speciesUnits } from "../species.js";
import { finite, type QuantityJson, quantity } from "./quantity.js";

/** The steady state of a duty. */
export function steadyJson(plant: Plant, duty: Duty, steady: SteadyState): Record<string, unknown> {
  const units = speciesUnits(plant.network, duty, steady.species);
  const temperature = duty.temperature ? { temperature: quantity(duty.temperature.of([]), kelvin(duty)) } : {};
  const mixture = (concentrations: ArrayLike<number>): Record<string, QuantityJson> => ({
    ...Object.fromEntries(steady.species.map((s, i) => [s, quantity(concentrations[i], units[i])])),
    ...temperature,
  });
  const n = steady.species.length;
  const places = plant.network.compartments.flatMap((c) => {
    const node = plant.exit.get(c.name);
    return node === undefined ? [] : [[c.name, mixture(steady.concentrations.subarray(node * n, node * n + n))]];
  });
  return {
    outlets: Object.fromEntries(steady.outlets.map((o) => [o.name, mixture(o.concentrations)])),
    compartments: Object.fromEntries(places),
    closure: Object.fromEntries(steady.species.map((s, i) => [s, finite(steady.closure[i])])),
    residual: finite(steady.residual),
    converged: steady.converged,
    ...(steady.worst ? { worst: steady.worst } : {}),
  };
}

/** The unit that the duty gives its temperature in. */
const kelvin = (duty: Duty) =>
  duty.temperature?.unit ?? { name: "K", factor: 1, offset: 0, dimension: [0, 0, 0, 0, 1, 0, 0] as const };
