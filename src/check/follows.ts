import { followedIn, type Network } from "../model/network.js";
import type { Report } from "../problems/report.js";
import { nearest } from "../text/nearest.js";
import type { Span } from "../text/source.js";

/** A substance that something follows is one that the network divides. */
export function followsKnown(network: Network, { of, at }: { of: string; at: Span }, report: Report): void {
  const known = followedIn(network);
  if (!known.includes(of)) report("follows-unknown", at, { name: of, nearest: nearest(of, known), known });
}
