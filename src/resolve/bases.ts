import type { Expression } from "../expressions/ast.js";
import { dimensionOf } from "../expressions/dimension-of.js";
import { isFault } from "../expressions/fault.js";
import { type Dimension, dimensions, over, sameDimension } from "../units/dimension.js";

/** What a concentration may count, in the order of preference where a law leaves it open. */
export const concentrationBases: readonly Dimension[] = [
  dimensions["molar concentration"],
  dimensions["mass concentration"],
  dimensions["number concentration"],
];

/** A rate law, and the species that its reaction changes: all of those are counted alike. */
export interface RateLaw {
  readonly rate: Expression;
  readonly changes: readonly number[];
}

/** How names other than species measure. */
export type OtherNames = (name: string) => Dimension | undefined;

/** Up to so many clusters every combination is tried; above, only all species counted alike. */
const fewClusters = 6;

/**
 * Every way to count the species in which each rate is concentration per time. Species that a reaction links are counted
 * alike; others may differ (chlorine in mg/L, bacteria per mL).
 * @returns one dimension per species, ways with all alike first; empty where the laws cannot be right
 */
export function findBases(species: readonly string[], laws: readonly RateLaw[], others: OtherNames): Dimension[][] {
  const cluster = clusters(species.length, laws);
  const count = Math.max(...cluster, -1) + 1;
  const ways: Dimension[][] = [];
  const tried = concentrationBases.length;
  for (let w = 0; w < tried; w++) ways.push(species.map(() => concentrationBases[w]));
  if (count > 1 && count <= fewClusters) {
    for (let w = 0; w < tried ** count; w++) {
      const chosen = Array.from({ length: count }, (_, c) => Math.floor(w / tried ** c) % tried);
      if (chosen.some((b) => b !== chosen[0])) ways.push(cluster.map((c) => concentrationBases[chosen[c]]));
    }
  }
  return ways.filter((way) => laws.every((law) => isRate(species, law, way, others)));
}

/** The dimension of a rate when species count in this way; undefined where it does not add up. */
export function rateDimension(
  species: readonly string[],
  { rate }: RateLaw,
  way: readonly Dimension[],
  others: OtherNames,
): Dimension | undefined {
  const scope = {
    dimension: (name: string): Dimension | undefined => {
      const i = species.indexOf(name);
      return i < 0 ? others(name) : way[i];
    },
  };
  const d = dimensionOf(rate, scope);
  return d && !isFault(d) ? d : undefined;
}

function isRate(species: readonly string[], law: RateLaw, way: readonly Dimension[], others: OtherNames): boolean {
  const d = rateDimension(species, law, way, others);
  return d !== undefined && law.changes.every((i) => sameDimension(d, over(way[i], dimensions.time)));
}

/** A number per species, the same for those that reactions link. */
function clusters(size: number, laws: readonly RateLaw[]): number[] {
  const label = Array.from({ length: size }, (_, i) => i);
  for (const { changes } of laws) {
    for (const i of changes) {
      const [from, to] = [label[i], label[changes[0]]];
      for (let j = 0; j < size; j++) if (label[j] === from) label[j] = to;
    }
  }
  const kept = [...new Set(label)];
  return label.map((l) => kept.indexOf(l));
}
