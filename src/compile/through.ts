import { memberNumber, memberOf } from "../model/members.js";
import type { Plant } from "./plant.js";

/**
 * What streams bring to a place by its name, m3/s, exchange and backflow left out: to a member of a repeat (`chain.2`) what
 * enters there and before.
 */
export function broughtTo({ network, streams }: Pick<Plant, "network" | "streams">, name: string): number {
  const body = memberOf(network.compartments, name);
  const last = body ? (memberNumber(name) ?? 1) : Number.POSITIVE_INFINITY;
  const place = body?.name ?? name;
  let sum = 0;
  for (const { role, to, enters, flow } of streams) {
    if (role !== "exchange" && to === place && (body === undefined || firstMember(to, enters) <= last)) sum += flow;
  }
  return sum;
}

/** The member by which a stream enters a repeat. */
const firstMember = (to: string, enters: string): number => (enters === to ? 1 : (memberNumber(enters) ?? 1));
