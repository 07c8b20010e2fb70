/** Least and greatest, for arrays too long to spread over the stack. Infinite where there are none. */
export function extent(values: Float64Array): readonly [least: number, greatest: number] {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const v of values) {
    if (v < low) low = v;
    if (v > high) high = v;
  }
  return [low, high];
}
