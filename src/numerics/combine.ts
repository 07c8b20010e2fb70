/** target += sum over j of weights[at + j] sources[j], two sources in a pass; no allocation. */
export function combine(
  weights: Float64Array,
  at: number,
  sources: readonly Float64Array[],
  target: Float64Array,
): void {
  const n = target.length;
  const last = sources.length - 1;
  for (let j = 0; j < last; j += 2) {
    const weight = weights[at + j];
    const weightNext = weights[at + j + 1];
    const source = sources[j];
    const sourceNext = sources[j + 1];
    for (let m = 0; m < n; m++) target[m] += weight * source[m] + weightNext * sourceNext[m];
  }
  if (last % 2 !== 0) return;
  const weight = weights[at + last];
  const source = sources[last];
  for (let m = 0; m < n; m++) target[m] += weight * source[m];
}
