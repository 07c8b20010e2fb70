import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import type { Figure } from "../../reaction/figures.js";
import type { Prediction } from "../../reaction/prediction.js";
import { speciesUnits } from "../species.js";
import { finite, type QuantityJson, quantity, unitName } from "./quantity.js";

/** The steady state of a duty, its figures and their bounds. */
export function steadyJson(plant: Plant, duty: Duty, prediction: Prediction): Record<string, unknown> {
  const { state: steady, figures, bounds, premises } = prediction;
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
    report: figures.map((f) => ({ name: f.name, ...reportedJson(f) })),
    bounds: bounds.flatMap((b) =>
      b === undefined
        ? []
        : [
            {
              name: b.name,
              segregated: reportedJson(b.segregated),
              maximumMixedness: reportedJson(b.maximumMixedness),
              position: b.position ?? null,
              ...(b.position === undefined ? { why: "undefined" } : {}),
            },
          ],
    ),
    ...(premises ? { premises } : {}),
    closure: Object.fromEntries(steady.species.map((s, i) => [s, finite(steady.closure[i])])),
    conserved: finite(steady.conserved),
    residual: finite(steady.residual),
    converged: steady.converged,
    ...(steady.worst ? { worst: steady.worst } : {}),
  };
}

/** The unit that the duty gives its temperature in. */
const kelvin = (duty: Duty) =>
  duty.temperature?.unit ?? { name: "K", factor: 1, offset: 0, dimension: [0, 0, 0, 0, 1, 0, 0] as const };

/** A figure in its unit; conversion, yield and selectivity are fractions. */
export const reportedJson = ({ value, unit, why }: Figure): QuantityJson =>
  why === undefined ? quantity(value, unit) : { value: null, unit: unitName(unit), why };
