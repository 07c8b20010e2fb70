import { random } from "../../src/numerics/random.js";

/** Draws for mutations. */
export interface Random {
  /** From 0 to below n, whole. */
  below(n: number): number;
  pick<T>(from: readonly T[]): T;
}

/** Draws of one input of a seed, so that the input can be made again from its number. */
export function randomOf(seed: number, input: number): Random {
  const { below } = random(seed * 2 ** 32 + input);
  return { below, pick: (from) => from[below(from.length)] };
}
