import { membersOf } from "../model/members.js";
import type { Network } from "../model/network.js";

/** Names that stand for places of a network, as trials and duties use them. */
export interface PlaceNames {
  readonly feeds: readonly string[];
  readonly outlets: readonly string[];
  /** Compartments, members of repeats, inlets of zoned bodies, and parts that have one inlet. */
  readonly entered: readonly string[];
  /** Compartments, members of repeats, outlets of zoned bodies, and parts that have one outlet. */
  readonly left: readonly string[];
}

/** All of them, in file order. */
export function placeNames({ feeds, compartments, outlets, groups }: Network): PlaceNames {
  const bodies = (side: "inlets" | "outlets"): string[] =>
    compartments.flatMap(({ name, zones }) => {
      if (!zones) return [name];
      const terminals = zones[side].map((t) => `${name}.${t.name}`);
      return terminals.length === 1 ? [name, ...terminals] : terminals;
    });
  const members = compartments.flatMap(membersOf);
  const parts = (side: "inlets" | "outlets"): string[] => groups.filter((g) => g[side].length === 1).map((g) => g.name);
  return {
    feeds: feeds.map((f) => f.name),
    outlets: outlets.map((o) => o.name),
    entered: [...bodies("inlets"), ...parts("inlets"), ...members],
    left: [...bodies("outlets"), ...parts("outlets"), ...members],
  };
}

/** Is it a cell of a zoned body, as `core.c17`? There may be a million of them, so they stand in no list of names. */
export const isCell = ({ compartments }: Network, name: string): boolean =>
  compartments.some(
    (c) => c.zones && name.startsWith(`${c.name}.`) && c.zones.names.numberOf(name.slice(c.name.length + 1)) >= 0,
  );
