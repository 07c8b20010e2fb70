import type { Plant } from "../../compile/plant.js";
import { type Curves, type CurvesOptions, plotStacked } from "../../draw/curves.js";
import type { Plotted } from "../../draw/plotted.js";
import type { Duty } from "../../model/duty.js";
import { temperatureUnit } from "../../reaction/figures.js";
import type { Profile } from "../../reaction/profile.js";
import { speciesUnits } from "../../reaction/species-units.js";
import { dimensions } from "../../units/dimension.js";
import { inUnit, type Unit } from "../../units/unit.js";

/** More bodies than this make no picture: the table has them all. */
const mostBodies = 6;

/**
 * What the liquid is like along bodies that it flows through, over the volume that it has passed: a plot for each body and
 * unit, and one for the temperature where heat is balanced.
 */
export function plotAlong(
  { network, columns }: Plant,
  duty: Duty,
  species: readonly string[],
  profiles: readonly Profile[],
  options: CurvesOptions = {},
): Plotted {
  const litres = network.units.unitFor(dimensions.volume);
  const units = speciesUnits(network, duty, species);
  const warmth = temperatureUnit(duty);
  const volumeOf = new Map(Array.from({ length: columns.size }, (_, i) => [columns.nameOf(i), volumeAt(columns, i)]));
  const plots = profiles.slice(0, mostBodies).flatMap((p): Curves[] => {
    const x = p.passed.map((share) => inUnit(share * (volumeOf.get(p.name) ?? 1), litres));
    const plot = (y: string, lines: Curves["lines"], free = false): Curves => ({
      title: p.name,
      x: `volume of ${p.name} passed, ${litres.name}`,
      y,
      lines,
      free,
    });
    const shown = (values: Float64Array, unit: Unit): Float64Array => values.map((v) => inUnit(v, unit));
    const byUnit = new Map(
      units.map((u) => [u.name, species.flatMap((_, i) => (units[i].name === u.name ? [i] : []))]),
    );
    return [
      ...[...byUnit].map(([unit, own]) =>
        plot(
          unit === "" ? "concentration" : `concentration, ${unit}`,
          own.map((i) => ({ label: species[i], x, y: shown(p.concentrations[i], units[i]) })),
        ),
      ),
      ...(p.temperature
        ? [
            plot(
              `temperature, ${warmth.name}`,
              [{ label: "temperature", unnamed: true, x, y: shown(p.temperature, warmth) }],
              true,
            ),
          ]
        : []),
    ];
  });
  return plotStacked(`${duty.title}: along the way`, plots, options);
}

const volumeAt = (columns: Plant["columns"], node: number): number =>
  columns.blockAt(node)?.volume ?? columns.volume[node];
