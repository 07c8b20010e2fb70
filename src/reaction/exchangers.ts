import type { Plant } from "../compile/plant.js";
import type { Duty, Exchanger } from "../model/duty.js";
import type { DutySettings } from "./constants.js";

/** A feed that what leaves at an outlet warms before it enters. */
export interface FeedExchanger {
  /** By number in the plant. */
  readonly feed: number;
  readonly outlet: number;
  /** By how much of the difference between the two the feed is warmed. */
  readonly gain: number;
}

/** What the size of an exchanger is called among the inputs of a duty: `feed.effectiveness`, `feed.conductance`. */
export const sizeName = ({ feed, size }: Pick<Exchanger, "feed" | "size">): string => `${feed}.${size.is}`;

/** The exchangers of a duty at the flows of a plant; those without a flow on either side are left out. */
export function exchangersOf(plant: Plant, duty: Duty, capacity: number, settings: DutySettings = {}): FeedExchanger[] {
  return (duty.heat?.exchangers ?? []).flatMap(({ feed: feedName, outlet: outletName, size }): FeedExchanger[] => {
    const feed = plant.feeds.findIndex((f) => f.name === feedName);
    const outlet = plant.outlets.findIndex((o) => o.name === outletName);
    if (feed < 0 || outlet < 0) return [];
    const [cold, hot] = [plant.feeds[feed].flow, plant.outlets[outlet].flow];
    if (!(cold > 0) || !(hot > 0)) return [];
    const smaller = Math.min(cold, hot);
    const value = settings[sizeName({ feed: feedName, size })] ?? size.value.of([]);
    const share =
      size.is === "effectiveness"
        ? Math.min(Math.max(value, 0), 1)
        : counterflow(Math.max(value, 0) / (capacity * smaller), smaller / Math.max(cold, hot));
    return [{ feed, outlet, gain: (share * smaller) / cold }];
  });
}

/**
 * Effectiveness of an exchanger in counterflow.
 * @param units number of transfer units: conductance over the smaller heat capacity flow
 * @param ratio smaller heat capacity flow over the larger
 * @see W.M. Kays, A.L. London, Compact Heat Exchangers, McGraw-Hill 1955 (from memory)
 */
export function counterflow(units: number, ratio: number): number {
  if (Math.abs(1 - ratio) < 1e-9) return units / (1 + units);
  const left = Math.exp(-units * (1 - ratio));
  return (1 - left) / (1 - ratio * left);
}
