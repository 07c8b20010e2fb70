import type { Plant } from "../compile/plant.js";
import type { Duty } from "../model/duty.js";
import type { DutySettings } from "./constants.js";
import type { Kinetics, Reactions } from "./kinetics.js";

/** A jacket as it acts on one node. */
export interface Wall {
  /** The duty's name for the place. */
  readonly place: string;
  /** K. */
  readonly outside: number;
  /** Conductance per volume of liquid that flows past, W/(m3 K). */
  readonly perVolume: number;
}

/** The jackets of a duty by place, each spread over the volume of the nodes under it. */
export function wallsOf(
  plant: Plant,
  duty: Duty,
  settings: DutySettings,
  placed: ReadonlyMap<number, readonly string[]>,
): (node: number) => Wall | undefined {
  const under = new Map<string, number>();
  for (const [node, places] of placed) {
    for (const place of places) under.set(place, (under.get(place) ?? 0) + flowing(plant, node));
  }
  const walls = new Map(
    [...(duty.heat?.jackets ?? [])].map(([place, { temperature, conductance }]): [string, Wall] => [
      place,
      {
        place,
        outside: settings[`${place}.jacket`] ?? temperature.of([]),
        perVolume: (settings[`${place}.conductance`] ?? conductance.of([])) / (under.get(place) ?? 1),
      },
    ]),
  );
  return (node) => {
    const narrowest = placed.get(node)?.findLast((place) => walls.has(place));
    return narrowest === undefined || !(flowing(plant, node) > 0) ? undefined : walls.get(narrowest);
  };
}

/** m3 of the liquid that flows: pockets are behind it. */
function flowing({ columns }: Plant, node: number): number {
  if (columns.nameOf(node).endsWith(".stagnant")) return 0;
  return columns.blockAt(node)?.volume ?? columns.volume[node];
}

/** The same reactions behind a wall. Pockets have no part of it. */
export function behindWall(reactions: Reactions, wall: Wall, heatCapacity: number): Reactions {
  const { scale, size } = reactions.cell;
  const rate = wall.perVolume / heatCapacity;
  const outside = wall.outside / scale[size - 1];
  const { cell, tube, pocket } = reactions;
  return { cell: jacketed(cell, rate, outside), tube: jacketed(tube, rate, outside), pocket };
}

/**
 * Kinetics in a body that exchanges heat through its wall.
 * @param rate conductance over heat capacity of the liquid held, 1/s
 * @param outside temperature on the other side, scaled
 */
export function jacketed(inside: Kinetics, rate: number, outside: number): Kinetics {
  const t = inside.size - 1;
  const wall = Float64Array.from({ length: inside.size }, (_, i) => (i === t ? 1 : 0));
  return {
    ...inside,
    numbers: [...inside.numbers, wall],
    production(y, at, out, to) {
      inside.production(y, at, out, to);
      out[to + t] += rate * (outside - y[at + t]);
    },
    jacobian(y, at, out, to) {
      inside.jacobian(y, at, out, to);
      out[to + t * inside.size + t] -= rate;
    },
  };
}
