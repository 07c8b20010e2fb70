/** Uniform numbers in (0, 1): Lehmer's generator with multiplier 48271 (Park, Miller & Stockmeyer, CACM 36 (1993) 108). */
export function uniformSource(seed: number): () => number {
  let s = (seed % 2147483646) + 1;
  return () => {
    s = (48271 * s) % 2147483647;
    return s / 2147483647;
  };
}
