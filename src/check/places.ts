import type { Network } from "../model/network.js";

/** Names that stand for places of a network, as trials and duties use them. */
export interface PlaceNames {
  readonly feeds: readonly string[];
  readonly outlets: readonly string[];
  /** Compartments, members of repeats, and parts that have one inlet. */
  readonly entered: readonly string[];
  /** Compartments, members of repeats, and parts that have one outlet. */
  readonly left: readonly string[];
}

/** All of them, in file order. */
export function placeNames({ feeds, compartments, outlets, groups }: Network): PlaceNames {
  const bodies = compartments.map((c) => c.name);
  const members = compartments.flatMap(({ name, counts }) =>
    Array.from({ length: counts.repeat ?? 0 }, (_, i) => `${name}.${i + 1}`),
  );
  const parts = (side: "inlets" | "outlets"): string[] => groups.filter((g) => g[side].length === 1).map((g) => g.name);
  return {
    feeds: feeds.map((f) => f.name),
    outlets: outlets.map((o) => o.name),
    entered: [...bodies, ...parts("inlets"), ...members],
    left: [...bodies, ...parts("outlets"), ...members],
  };
}
