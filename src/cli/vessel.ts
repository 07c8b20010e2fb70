import { kindValues } from "../compile/evaluate.js";
import type { Plant } from "../compile/plant.js";
import { isClosed } from "../model/network.js";

/** One body of a vessel as tables show it. SI. */
export interface Body {
  readonly name: string;
  readonly kind: string;
  readonly volume: number;
  /** Through-flow by streams; exchange counts only where nothing else reaches the body. */
  readonly flow: number;
  /** volume / flow; infinite for what no flow reaches. */
  readonly spaceTime: number;
}

/** The bodies that have a volume, in file order. */
export function bodiesOf(plant: Plant): Body[] {
  const { network, env, streams } = plant;
  const through = new Map<string, number>();
  const exchanged = new Map<string, number>();
  const count = (sums: Map<string, number>, name: string, flow: number) => sums.set(name, (sums.get(name) ?? 0) + flow);
  for (const { role, from, to, flow } of streams) {
    if (role !== "exchange") count(through, to, flow);
    else for (const end of [from, to]) count(exchanged, end, flow);
  }
  return network.compartments.flatMap((c): Body[] => {
    if (c.values.volume === undefined && !c.zones) return [];
    const volume = c.kind.volume(kindValues(c, env));
    const flow = through.get(c.name) || (exchanged.get(c.name) ?? 0);
    return [
      {
        name: c.name,
        kind: c.zones ? `${c.kind.name}, ${c.zones.volume.length} cells` : c.kind.name,
        volume,
        flow,
        spaceTime: volume === 0 ? 0 : volume / flow,
      },
    ];
  });
}

/** The vessel as a whole. SI. */
export function vesselOf(plant: Plant): {
  volume: number;
  active: number;
  dead: number;
  feed: number;
  /** Undefined in a closed vessel. */
  meanTime: number | undefined;
} {
  const feed = plant.feeds.reduce((sum, f) => sum + f.flow, 0);
  const { total, active, dead } = plant.volume;
  return { volume: total, active, dead, feed, meanTime: isClosed(plant) ? undefined : active / feed };
}
