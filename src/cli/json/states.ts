import type { Plant } from "../../compile/plant.js";
import type { Duty } from "../../model/duty.js";
import { figuresOf, temperatureUnit } from "../../reaction/figures.js";
import { speciesUnits } from "../../reaction/species-units.js";
import type { StatesFound } from "../../reaction/states.js";
import { dimensions } from "../../units/dimension.js";
import type { Unit } from "../../units/unit.js";
import { quantity } from "./quantity.js";
import { reportedJson } from "./steady.js";

/** All steady states that were found. */
export function statesJson(plant: Plant, duty: Duty, { states, left }: StatesFound): Record<string, unknown> {
  const time = plant.network.units.time;
  const perTime: Unit = { name: `1/${time.name}`, factor: 1 / time.factor, offset: 0, dimension: dimensions.frequency };
  const warm = temperatureUnit(duty);
  const mixture = (species: readonly string[], c: ArrayLike<number>, temperature: number | undefined) => {
    const units = speciesUnits(plant.network, duty, species);
    return {
      ...Object.fromEntries(species.map((s, i) => [s, quantity(c[i], units[i])])),
      ...(temperature === undefined ? {} : { temperature: quantity(temperature, warm) }),
    };
  };
  return {
    steadyStates: states.map(({ state, stable, mode, reached }) => {
      const n = state.species.length;
      const places = plant.network.compartments.flatMap((c) => {
        const node = plant.exit.get(c.name);
        if (node === undefined) return [];
        const held = state.concentrations.subarray(node * n, node * n + n);
        return [[c.name, mixture(state.species, held, state.temperatures?.[node])]];
      });
      return {
        stable: stable ?? null,
        ...(mode && !mode.rough
          ? { growth: quantity(mode.growth, perTime), swing: quantity(mode.swing, perTime) }
          : {}),
        fromFeed: reached,
        outlets: Object.fromEntries(
          state.outlets.map((o) => [o.name, mixture(state.species, o.concentrations, o.temperature)]),
        ),
        compartments: Object.fromEntries(places),
        report: figuresOf(plant, duty, state).map((f) => ({ name: f.name, ...reportedJson(f) })),
      };
    }),
    notSearched: left,
  };
}
