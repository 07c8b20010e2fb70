import { random } from "../numerics/random.js";
import { stratified } from "../numerics/stratified.js";

/**
 * Numbers in (0, 1) that belong to a name: the same for one name, count and seed, whoever else is drawn beside it and in
 * whatever order, so that networks and duties share the draws of what they have in common. Together the columns of several
 * names are a Latin hypercube.
 */
export const columnFor = (name: string, count: number, seed: number): Float64Array =>
  stratified(count, random(streamSeed(name, seed)));

/** A seed for the stream of a name: 32 bits from the name (FNV-1a), above them the seed. */
export function streamSeed(name: string, seed: number): number {
  let hash = 0x811c9dc5;
  for (const c of name) hash = Math.imul(hash ^ (c.codePointAt(0) ?? 0), 0x01000193) >>> 0;
  return hash + 2 ** 32 * (Math.abs(Math.trunc(seed)) % 2 ** 20);
}
