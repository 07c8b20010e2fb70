import type { Duty } from "../model/duty.js";
import type { Network } from "../model/network.js";
import { type Dimension, dimensions, isRatio, sameDimension, times } from "../units/dimension.js";
import { one, type Unit } from "../units/unit.js";

/** The unit to print each species in: that of its own feed, else of another species counted alike, else the file's. */
export function speciesUnits(network: Network, duty: Duty, species: readonly string[]): Unit[] {
  const fed = [...duty.feeds.values()].flatMap((f) => [...f.species].map(([name, { value }]) => ({ name, value })));
  return species.map((name, i) => {
    const own = fed.find((f) => f.name === name && f.value.unit)?.value.unit;
    if (own) return own;
    const dimension = duty.concentrations[i] ?? fed.find((f) => f.name === name)?.value.dimension;
    const alike = dimension && fed.find((f) => f.value.unit && sameDimension(f.value.dimension, dimension))?.value.unit;
    return alike ?? network.units.unitFor(dimension ?? [0, 0, 0, 0, 0, 0, 0]);
  });
}

/** The unit to print an amount of a species in, by the dimension of its concentration: what is counted per volume is a number. */
export function amountUnit({ units }: Network, concentration: Dimension): Unit {
  const dimension = times(concentration, dimensions.volume);
  return isRatio(dimension) ? one : units.unitFor(dimension);
}
