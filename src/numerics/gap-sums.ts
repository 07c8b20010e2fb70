/** Numbers read twice at one time are not taken to be the same. */
export const closest = 0.9999;

/** What one chain adds to the likelihood. */
export interface Share {
  readonly square: number;
  readonly logDeterminant: number;
  /** Basis against residuals, and against itself (row-major). */
  readonly along: Float64Array;
  readonly between: Float64Array;
}

/** Members of a list of numbers, and the gap of each from the one before. */
interface Gapped {
  readonly rows: ArrayLike<number>;
  readonly gaps: Float64Array;
}

/**
 * Products of all pairs of residuals and basis columns, summed over the members that stand at one gap from the one before: what a
 * chain adds to the likelihood at any time follows from them. Row-major, as many rows as vectors.
 */
export interface GapSums {
  /** The first of them is of the member that has none before it. */
  readonly gap: number;
  count: number;
  /** Of members, of members with the one before (both ways), of the ones before. */
  readonly own: Float64Array;
  readonly across: Float64Array;
  readonly before: Float64Array;
}

/** More different gaps than these are walked through instead. */
const mostGaps = 8;

/** Sums of a chain; undefined where its gaps are of too many sorts. */
export function sumsByGap({ rows, gaps }: Gapped, vectors: readonly Float64Array[]): readonly GapSums[] | undefined {
  const m = vectors.length;
  const empty = (gap: number): GapSums => ({
    gap,
    count: 0,
    own: new Float64Array(m * m),
    across: new Float64Array(m * m),
    before: new Float64Array(m * m),
  });
  const all: GapSums[] = [empty(0)];
  const groups = new Int32Array(gaps.length);
  for (let i = 1; i < gaps.length; i++) {
    // Clocks count in decimals: gaps that differ by rounding alone are one.
    const same = (k: number): boolean => k > 0 && Math.abs(all[k].gap - gaps[i]) <= 1e-9 * gaps[i];
    let group = same(groups[i - 1]) ? groups[i - 1] : all.findIndex((_, k) => same(k));
    if (group < 0) group = all.push(empty(gaps[i])) - 1;
    if (all.length > mostGaps) return undefined;
    groups[i] = group;
  }
  for (const [k, x] of vectors.entries())
    for (let l = 0; l <= k; l++) addProducts(rows, groups, all, x, vectors[l], k * m + l);
  for (const group of groups) all[group].count++;
  return all;
}

/** Adds the products of two vectors, or of one with itself, in place `at` of the sums. */
function addProducts(
  rows: ArrayLike<number>,
  groups: Int32Array,
  all: readonly GapSums[],
  x: Float64Array,
  y: Float64Array,
  at: number,
): void {
  if (groups.length === 0) return;
  let group = groups[0];
  let [own, across, before, lastX, lastY] = [0, 0, 0, 0, 0];
  for (let i = 0; i <= groups.length; i++) {
    if (i === groups.length || groups[i] !== group) {
      const sums = all[group];
      sums.own[at] += own;
      sums.across[at] += across;
      sums.before[at] += before;
      if (i === groups.length) return;
      own = across = before = 0;
      group = groups[i];
    }
    const nowX = x[rows[i]];
    const nowY = y[rows[i]];
    own += nowX * nowY;
    across += nowX * lastY + lastX * nowY;
    before += lastX * lastY;
    lastX = nowX;
    lastY = nowY;
  }
}

/** What a chain adds at a correlation time; 0: members do not hang together. */
export function shareOf(all: readonly GapSums[], time: number, p: number): Share {
  const m = p + 1;
  const along = new Float64Array(p);
  const between = new Float64Array(p * p);
  let [square, logDeterminant] = [0, 0];
  for (const [g, { gap, count, own, across, before }] of all.entries()) {
    const f = time > 0 && g > 0 ? Math.min(closest, Math.exp(-gap / time)) : 0;
    const left = 1 - f * f;
    const whole = (k: number, l: number): number =>
      (own[k * m + l] - f * across[k * m + l] + f * f * before[k * m + l]) / left;
    logDeterminant += count * Math.log(left);
    square += whole(0, 0);
    for (let k = 0; k < p; k++) {
      along[k] += whole(k + 1, 0);
      for (let l = 0; l <= k; l++) between[k * p + l] += whole(k + 1, l + 1);
    }
  }
  for (let k = 0; k < p; k++) for (let l = 0; l < k; l++) between[l * p + k] = between[k * p + l];
  return { square, logDeterminant, along, between };
}
