import type { Random } from "./random.js";

/**
 * One column of a Latin hypercube: numbers in the open unit interval, one in each of `count` equal strata, in random order.
 * Columns from streams of their own may be put together in any number and any order.
 * @see M. D. McKay, R. J. Beckman, W. J. Conover, Technometrics 21 (1979) 239-245
 */
export function stratified(count: number, source: Random): Float64Array {
  const order = Int32Array.from({ length: count }, (_, i) => i);
  for (let i = count - 1; i > 0; i--) {
    const k = source.below(i + 1);
    [order[i], order[k]] = [order[k], order[i]];
  }
  return Float64Array.from(order, (stratum) => (stratum + Math.max(source.uniform(), 2 ** -30)) / count);
}
