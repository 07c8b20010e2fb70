import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import { type Figure, temperatureUnit } from "../../reaction/figures.js";
import type { HeatBalance } from "../../reaction/heat-balance.js";
import type { Prediction } from "../../reaction/prediction.js";
import { speciesUnits } from "../../reaction/species-units.js";
import { kilowatt } from "../heat.js";
import { finite, type QuantityJson, quantity, unitName } from "./quantity.js";

/** The steady state of a duty, its figures and their bounds. */
export function steadyJson(plant: Plant, duty: Duty, prediction: Prediction): Record<string, unknown> {
  const { state: steady, figures, bounds, premises } = prediction;
  const units = speciesUnits(plant.network, duty, steady.species);
  const held = duty.temperature?.of([]);
  const mixture = (
    concentrations: ArrayLike<number>,
    temperature: number | undefined = held,
  ): Record<string, QuantityJson> => ({
    ...Object.fromEntries(steady.species.map((s, i) => [s, quantity(concentrations[i], units[i])])),
    ...(temperature === undefined ? {} : { temperature: quantity(temperature, temperatureUnit(duty)) }),
  });
  const n = steady.species.length;
  const places = plant.network.compartments.flatMap((c) => {
    const node = plant.exit.get(c.name);
    return node === undefined
      ? []
      : [[c.name, mixture(steady.concentrations.subarray(node * n, node * n + n), steady.temperatures?.[node])]];
  });
  return {
    outlets: Object.fromEntries(steady.outlets.map((o) => [o.name, mixture(o.concentrations, o.temperature)])),
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
    ...(steady.heat ? { heat: heatJson(steady.heat) } : {}),
    conserved: finite(steady.conserved),
    residual: finite(steady.residual),
    converged: steady.converged,
    ...(steady.worst ? { worst: steady.worst } : {}),
  };
}

/** Where the heat goes. */
const heatJson = ({ released, walls, exchanged, carried, closure }: HeatBalance): Record<string, unknown> => ({
  released: quantity(released, kilowatt),
  walls: Object.fromEntries(walls.map(({ place, gained }) => [place, quantity(gained, kilowatt)])),
  ...(exchanged.length > 0
    ? { exchanged: exchanged.map(({ feed, outlet, passed }) => ({ feed, outlet, passed: quantity(passed, kilowatt) })) }
    : {}),
  carried: quantity(carried, kilowatt),
  closure: finite(closure),
});

/** A figure in its unit; conversion, yield and selectivity are fractions. */
export const reportedJson = ({ value, unit, why }: Figure): QuantityJson =>
  why === undefined ? quantity(value, unit) : { value: null, unit: unitName(unit), why };
