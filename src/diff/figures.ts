import { kindValues } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import type { Dimension } from "../units/dimension.js";
import { dimensions, sameDimension } from "../units/dimension.js";
import type { Unit } from "../units/unit.js";
import type { Translate } from "./keys.js";
import type { Matching } from "./match.js";

/** A figure before and after, SI, each in the unit of its own file; undefined where there is none. */
export interface Figure {
  readonly of: "flow" | "volume" | "space time";
  /** As the later network calls it; what is gone, as the earlier one did. */
  readonly name: string;
  readonly before: Shown | undefined;
  readonly after: Shown | undefined;
  readonly same: boolean;
}

export interface Shown {
  readonly value: number;
  readonly unit: Unit;
}

/** Flows of streams, volumes and space times of bodies, and those of the whole vessel, in two networks. */
export function figuresOf(before: Plant, after: Plant, { before: a, after: b }: Matching): Figure[] {
  const [x, y] = [figures(before, a), figures(after, b)];
  return [...new Set([...y.keys(), ...x.keys()])].map((key): Figure => {
    const [was, is] = [x.get(key), y.get(key)];
    const { of, name } = (is ?? was) as Found;
    const same =
      was !== undefined &&
      is !== undefined &&
      sameDimension(was.shown.unit.dimension, is.shown.unit.dimension) &&
      close(was.shown.value, is.shown.value);
    return { of, name, before: was?.shown, after: is?.shown, same };
  });
}

/** Rounding of a balance is no change. */
const close = (x: number, y: number): boolean =>
  x === y || Math.abs(x - y) <= 1e-9 * Math.max(Math.abs(x), Math.abs(y));

interface Found {
  readonly of: Figure["of"];
  readonly name: string;
  readonly shown: Shown;
}

/** By a key that is the same for the same thing in both networks. */
function figures(plant: Plant, t: Translate): Map<string, Found> {
  const { network, env, streams, feeds, volume } = plant;
  const found = new Map<string, Found>();
  const unitOf: Record<Figure["of"], Unit> = {
    flow: unitFor(dimensions.flow),
    volume: unitFor(dimensions.volume),
    "space time": network.units.time,
  };
  function unitFor(dimension: Dimension): Unit {
    return network.units.unitFor(dimension);
  }
  const add = (of: Figure["of"], key: string, name: string, value: number): void =>
    void found.set(`${of} ${key}`, { of, name, shown: { value, unit: unitOf[of] } });
  for (const s of streams) {
    const bothWays = s.role === "exchange";
    const ends = [t.place(s.leaves), t.place(s.enters)];
    add(
      "flow",
      (bothWays ? ends.sort() : ends).join(bothWays ? "<>" : ">"),
      `${s.leaves}${bothWays ? "<>" : ">"}${s.enters}`,
      s.flow,
    );
  }
  for (const c of network.compartments) {
    if (c.values.volume === undefined) continue;
    const held = c.kind.volume(kindValues(c, env));
    const flow = streams.reduce((sum, s) => sum + (s.role !== "exchange" && s.to === c.name ? s.flow : 0), 0);
    add("volume", t.place(c.name), c.name, held);
    if (flow > 0) add("space time", t.place(c.name), c.name, held / flow);
  }
  const feed = feeds.reduce((sum, f) => sum + f.flow, 0);
  add("volume", "all", "all", volume.total);
  add("volume", "dead", "dead", volume.dead);
  if (feed > 0) add("space time", "all", "all", volume.active / feed);
  return found;
}
