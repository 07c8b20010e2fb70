import type { Plant } from "../compile/plant.js";
import type { DutyContents } from "../model/duty.js";
import type { DutySettings } from "./constants.js";

/** Of `Conditions`: what a mixture is made of, what counts as 1, and what is fed. SI. */
interface Mixtures {
  readonly species: readonly string[];
  readonly scale: Float64Array;
  readonly feeds: readonly Float64Array[];
}

/**
 * What a node holds at the start, scaled: the levels of the longest name that it lies under, else of `all`, else nothing. Where
 * heat is balanced and no temperature is given, that of all feeds mixed.
 */
export function holdings(
  plant: Plant,
  { species, scale, feeds }: Mixtures,
  contents: DutyContents | undefined,
  settings: DutySettings,
): (node: number) => Float64Array {
  const made = new Map<string, Float64Array>();
  const flow = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const mixed = plant.feeds.reduce((sum, f, k) => sum + f.flow * feeds[k][species.length], 0) / flow;
  const of = (name: string): Float64Array => {
    let level = made.get(name);
    if (!level) {
      const given = contents?.levels.get(name);
      level = scale.map((s, i) => {
        if (i === species.length) return (given?.temperature?.of([]) ?? mixed) / s;
        return (settings[`${name}.${species[i]}`] ?? given?.species.get(species[i])?.value.of([]) ?? 0) / s;
      });
      made.set(name, level);
    }
    return level;
  };
  return (node) => {
    let name = plant.columns.nameOf(node);
    for (; name !== ""; name = name.slice(0, Math.max(0, name.lastIndexOf(".")))) {
      if (contents?.levels.has(name)) return of(name);
    }
    return of("all");
  };
}
