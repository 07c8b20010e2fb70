/**
 * Times as they are wanted for a curve.
 * @throws RangeError where one is not finite, below zero or before the one that it follows
 */
export function ascending(times: ArrayLike<number>): Float64Array<ArrayBuffer> {
  const clock = Float64Array.from(times);
  let before = 0;
  for (const t of clock) {
    if (!(t >= before && t < Number.POSITIVE_INFINITY)) {
      throw new RangeError(`times must be finite, ascend and not begin before 0: ${t} comes after ${before}`);
    }
    before = t;
  }
  return clock;
}
