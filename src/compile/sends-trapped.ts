import { followedIn, isClosed, type Network } from "../model/network.js";
import { reachable } from "../numerics/graph.js";
import type { Report } from "../problems/report.js";
import { sharesOf } from "./sends.js";
import type { SolvedStream } from "./solved-stream.js";

/**
 * A substance that gets somewhere gets out again: from every place that sends it otherwise than the liquid, and that it
 * reaches, a way leads to an outlet. Told at the first place that keeps it.
 */
export function sendsTrapped(
  network: Network,
  env: ArrayLike<number>,
  solved: readonly SolvedStream[],
  report: Report,
): void {
  if (isClosed(network)) return;
  const { feeds, compartments, outlets } = network;
  const size = feeds.length + compartments.length + outlets.length;
  // Exchange takes everything along, both ways: pairs that read the same from behind.
  const index = new Map(compartments.map((c, i) => [c.name, feeds.length + i]));
  const placeOf = (name: string) => index.get(name) ?? index.get(name.replace(/\.\d+$/, "")); // a member of a repeat
  const pairs = compartments.flatMap((c) => c.exchanges.map((e) => [index.get(c.name), placeOf(e.partner)]));
  const joined = pairs.flatMap(([a, b]) => (a === undefined || b === undefined ? [] : [[a, b] as const]));
  const both = [...joined.map(([a]) => a), ...joined.map(([, b]) => b).toReversed()];
  for (const of of followedIn(network)) {
    const carries = carriedBy(network, env, solved, of);
    const taken = solved.filter((_, k) => carries[k]);
    const [from, to] = [
      [...taken.map((s) => s.from), ...both],
      [...taken.map((s) => s.to), ...both.toReversed()],
    ];
    const outs = outlets.map((_, i) => feeds.length + compartments.length + i);
    const reached = reachable({ size, from, to }, feeds.keys());
    const leaves = reachable({ size, from: to, to: from }, outs);
    const kept = compartments.flatMap(({ name, sends = [] }, i) => {
      const place = feeds.length + i;
      const own = sends.find((s) => s.of === of);
      return own && !own.unknown && reached[place] && !leaves[place] ? [{ name, at: own.at }] : [];
    });
    if (kept.length > 0) report("sends-trapped", kept[0].at, { of, names: kept.map((k) => k.name) });
  }
}

/** By solved stream: does it take any of a substance? */
function carriedBy(
  { feeds, compartments }: Network,
  env: ArrayLike<number>,
  solved: readonly SolvedStream[],
  of: string,
): boolean[] {
  const carries = solved.map((s) => s.flow > 0);
  compartments.forEach(({ streams, sends = [] }, i) => {
    if (!sends.some((s) => s.of === of)) return;
    const links = solved.flatMap((s, k) => (s.from === feeds.length + i ? [k] : []));
    sharesOf(streams, of, env).shares.forEach((share, n) => {
      // What cannot be told is not held against anyone.
      carries[links[n]] = !(share <= 0);
    });
  });
  return carries;
}
