/**
 * What a first-order lag y' = rate (c - y) makes of a Poisson series c(d) = sum of s_k w_k(d): the numbers
 * rate * integral from 0 to d of exp(-rate (d - s)) w_k(s) ds, by the recursion that integration by parts gives. Stable
 * where the lag is faster than the series: rate > 2 * poissonRate.
 * @param weight Poisson weights w_k(d), the first `terms` count
 * @param out    as long as `weight`; overwritten
 */
export function lagWeights(
  rate: number,
  poissonRate: number,
  d: number,
  weight: Float64Array,
  terms: number,
  out: Float64Array,
): void {
  const gap = rate - poissonRate;
  // w_0(d) - exp(-rate d), without cancellation at small d
  let integral = (weight[0] * -Math.expm1(-gap * d)) / gap;
  out[0] = rate * integral;
  const keep = poissonRate / gap;
  const gain = 1 / gap;
  for (let k = 1; k < terms; k++) {
    integral = weight[k] * gain - keep * integral;
    out[k] = rate * integral;
  }
}
