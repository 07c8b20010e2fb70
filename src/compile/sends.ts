import { followedIn, type Network, type Stream } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { dimensions } from "../units/dimension.js";
import type { Plant } from "./plant.js";
import type { Say } from "./say.js";
import type { SolvedStream } from "./solved-stream.js";

/** How far shares may be from 100 %. */
const rounding = 1e-9;

/** The share of a substance that each stream takes, by stream; `rest` is what the others leave. */
export function sharesOf(streams: readonly Stream[], of: string, env: ArrayLike<number>) {
  const parts = streams.map((s) => s.carries?.get(of));
  const shares = parts.map((part) => (part === undefined || part === "rest" ? 0 : part.of(env)));
  const total = shares.reduce((sum, x) => sum + x, 0);
  const rest = parts.indexOf("rest");
  if (rest >= 0) shares[rest] = Math.abs(1 - total) < 1e-15 ? 0 : 1 - total;
  return { parts, shares, total, rest };
}

/** Shares of every substance lie within 0 to 100 % and add to it, and where some of it goes liquid goes, too. */
export function sendsPossible(
  { compartments, feeds }: Network,
  env: ArrayLike<number>,
  solved: readonly SolvedStream[] | undefined,
  report: Report,
  say: Say,
): void {
  compartments.forEach(({ name, streams, sends = [] }, i) => {
    const flows = solved?.filter((s) => s.from === feeds.length + i);
    for (const { of, at, unknown } of sends) {
      if (unknown) continue;
      const { parts, shares, total, rest } = sharesOf(streams, of, env);
      if (Number.isNaN(total)) continue; // another rule says so
      const text = (share: number): string => say(share, dimensions.ratio);
      const wrong = parts.findIndex((part, k) => part && part !== "rest" && !(shares[k] >= 0 && shares[k] <= 1));
      const part = parts[wrong];
      if (part && part !== "rest") {
        report("sends-range", part.at, { name, of, to: streams[wrong].to, value: text(shares[wrong]) });
      } else if (parts.filter((p) => p === "rest").length > 1) report("sends-rest", at, { name, of });
      else if (rest >= 0 ? total > 1 + rounding : Math.abs(total - 1) > rounding) {
        report("sends-sum", at, { name, of, total: text(total), rest: rest >= 0 });
      } else {
        const through = flows?.reduce((sum, s) => sum + s.flow, 0) ?? 0;
        const dry = through > 0 ? shares.findIndex((share, k) => share > 0 && flows?.[k].flow === 0) : -1;
        if (dry >= 0) report("sends-dry", at, { name, to: streams[dry].to, of, share: text(shares[dry]) });
      }
    }
  });
}

/**
 * By substance that divides somewhere otherwise than the liquid: for every link of a plant the flow of liquid, at the level
 * of the node that it leaves, that would carry what the substance sends there, m3/s. A stream that takes the share t of the
 * substance and l of the liquid leaves at t/l times that level; everywhere else these are the flows.
 * @param first the link of the first stream; the others follow in the order of `solved`
 */
export function carriedFlows(
  network: Network,
  env: ArrayLike<number>,
  solved: readonly SolvedStream[],
  flow: Float64Array,
  first: number,
): ReadonlyMap<string, Float64Array> {
  return new Map(
    followedIn(network).map((of) => {
      const carried = flow.slice();
      network.compartments.forEach(({ streams, sends = [] }, i) => {
        if (!sends.some((s) => s.of === of)) return;
        const place = network.feeds.length + i;
        const links = solved.flatMap((s, k) => (s.from === place ? [k] : []));
        const through = links.reduce((sum, k) => sum + solved[k].flow, 0);
        sharesOf(streams, of, env).shares.forEach((share, n) => {
          carried[first + links[n]] = share * through;
        });
      });
      return [of, carried] as const;
    }),
  );
}

/** The share of a substance in one stream, as tables show it, beside that of the liquid. */
export interface Parting {
  readonly of: string;
  readonly from: string;
  readonly to: string;
  readonly share: number;
  readonly liquid: number;
}

/** Where substances divide otherwise than the liquid, in file order. */
export function partingsOf({ network, env, streams }: Plant): Parting[] {
  return network.compartments.flatMap(({ name, streams: ways, sends = [] }) => {
    const own = streams.filter((s) => s.role !== "exchange" && s.from === name);
    const through = own.reduce((sum, s) => sum + s.flow, 0);
    return sends.flatMap(({ of }) =>
      sharesOf(ways, of, env).shares.map(
        (share, k): Parting => ({ of, from: name, to: own[k].enters, share, liquid: own[k].flow / through }),
      ),
    );
  });
}

/** The plant that a substance meets: all is the same but what its links carry. The plant itself for the liquid. */
export function plantFollowing(plant: Plant, of: string | undefined): Plant {
  const flow = of === undefined || plant.follows === of ? undefined : plant.carried?.get(of);
  if (!flow) return plant;
  return {
    network: plant.network,
    env: plant.env,
    get nodes() {
      return plant.nodes;
    },
    columns: plant.columns,
    from: plant.from,
    to: plant.to,
    structure: plant.structure,
    flow,
    follows: of,
    feeds: plant.feeds,
    outlets: plant.outlets,
    entry: plant.entry,
    exit: plant.exit,
    get groups() {
      return plant.groups;
    },
    get streams() {
      return plant.streams;
    },
    volume: plant.volume,
  };
}
