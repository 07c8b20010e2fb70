const fewest = 20;

/**
 * 2.5 and 97.5 % points of a sample, between neighbours by proportion; undefined where fewer than 20 numbers are finite, or so
 * many are infinite that an end is.
 */
export function interval95(sample: readonly number[]): readonly [number, number] | undefined {
  const sorted = sample.filter(Number.isFinite).sort((a, b) => a - b);
  const infinite = sample.filter((x) => Math.abs(x) === Number.POSITIVE_INFINITY).length;
  return sorted.length < fewest || infinite > 0.025 * sample.length
    ? undefined
    : [quantile(sorted, 0.025), quantile(sorted, 0.975)];
}

/** The p-quantile of an ascending sample, between neighbours by proportion. */
export function quantile(sorted: readonly number[], p: number): number {
  const at = p * (sorted.length - 1);
  const low = Math.floor(at);
  const high = Math.min(low + 1, sorted.length - 1);
  return sorted[low] + (at - low) * (sorted[high] - sorted[low]);
}
