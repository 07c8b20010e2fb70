/** Times that tell all unknowns best together, and how near a plan comes to them. */
export interface Optimal {
  /** Indices of the chosen candidates, rising. */
  readonly chosen: readonly number[];
  /** Natural logarithm of the determinant of the information. */
  readonly information: number;
}

/**
 * D-optimal samples: the set whose information matrix has the greatest determinant, by adding one after another and then
 * exchanging while that helps (V. V. Fedorov, Theory of Optimal Experiments, 1972).
 * @param columns weighted derivatives by unknown: one row per candidate, then rows that are there in any case (priors)
 * @param candidates how many rows are candidates
 * @param count    how many to choose, no candidate twice
 */
export function optimalSamples(
  columns: readonly Float64Array[],
  candidates: number,
  count: number,
): Optimal | undefined {
  const p = columns.length;
  const rows = columns[0]?.length ?? 0;
  if (p === 0 || candidates < count) return undefined;
  // Lengths of 1: the determinant's choice is the same, and rounding is not in its way.
  const length = columns.map((c) => Math.sqrt(c.reduce((s, v) => s + v * v, 0)) || 1);
  const row = (i: number): Float64Array => Float64Array.from(columns, (c, j) => c[i] / length[j]);
  const all = Array.from({ length: rows }, (_, i) => row(i));
  const matrix = new Float64Array(p * p);
  for (let j = 0; j < p; j++) matrix[j * p + j] = 1e-9;
  for (let i = candidates; i < rows; i++) addOuter(matrix, all[i], 1);
  const chosen = new Set<number>();
  for (let k = 0; k < count; k++) {
    const inverse = invert(matrix, p);
    if (!inverse) return undefined;
    let best = -1;
    let most = Number.NEGATIVE_INFINITY;
    for (let i = 0; i < candidates; i++) {
      const g = chosen.has(i) ? Number.NEGATIVE_INFINITY : product(inverse, all[i], all[i]);
      if (g > most) [best, most] = [i, g];
    }
    chosen.add(best);
    addOuter(matrix, all[best], 1);
  }
  for (let pass = 0; pass < 10 * count; pass++) {
    const inverse = invert(matrix, p);
    const pair = inverse && bestExchange(inverse, all, candidates, chosen);
    if (!pair) break;
    addOuter(matrix, all[pair.out], -1);
    addOuter(matrix, all[pair.into], 1);
    chosen.delete(pair.out);
    chosen.add(pair.into);
  }
  const information = logDeterminant(matrix, p);
  const scale = 2 * length.reduce((sum, l) => sum + Math.log(l), 0);
  return { chosen: [...chosen].sort((a, b) => a - b), information: information + scale };
}

/** ln det of the information of all rows. */
export function informationOf(columns: readonly Float64Array[]): number {
  const p = columns.length;
  const length = columns.map((c) => Math.sqrt(c.reduce((s, v) => s + v * v, 0)) || 1);
  const matrix = new Float64Array(p * p);
  for (let i = 0; i < p; i++)
    for (let j = 0; j < p; j++)
      matrix[i * p + j] =
        columns[i].reduce((sum, v, k) => sum + v * columns[j][k], 0) / (length[i] * length[j]) + (i === j ? 1e-9 : 0);
  return logDeterminant(matrix, p) + 2 * length.reduce((sum, l) => sum + Math.log(l), 0);
}

function addOuter(matrix: Float64Array, v: Float64Array, sign: 1 | -1): void {
  const p = v.length;
  for (let i = 0; i < p; i++) for (let j = 0; j < p; j++) matrix[i * p + j] += sign * v[i] * v[j];
}

/** The exchange that makes the determinant grow most: by 1 + d_in - d_out - d_in d_out + d_both^2 (Fedorov). */
function bestExchange(
  inverse: Float64Array,
  rows: readonly Float64Array[],
  candidates: number,
  chosen: ReadonlySet<number>,
): { out: number; into: number } | undefined {
  const own = Float64Array.from({ length: candidates }, (_, i) => product(inverse, rows[i], rows[i]));
  let best: { out: number; into: number } | undefined;
  let most = 1 + 1e-9;
  for (const out of chosen) {
    const half = times(inverse, rows[out]);
    for (let into = 0; into < candidates; into++) {
      if (chosen.has(into)) continue;
      let both = 0;
      for (let k = 0; k < half.length; k++) both += half[k] * rows[into][k];
      const grown = 1 + own[into] - own[out] - own[into] * own[out] + both * both;
      if (grown > most) [best, most] = [{ out, into }, grown];
    }
  }
  return best;
}

const times = (a: Float64Array, v: Float64Array): Float64Array =>
  v.map((_, i) => v.reduce((sum, x, j) => sum + a[i * v.length + j] * x, 0));

const product = (a: Float64Array, v: Float64Array, w: Float64Array): number =>
  times(a, v).reduce((sum, x, i) => sum + x * w[i], 0);

/** Cholesky factor of a symmetric positive matrix; undefined where it is not. */
function cholesky(a: Float64Array, p: number): Float64Array | undefined {
  const l = new Float64Array(p * p);
  for (let i = 0; i < p; i++) {
    for (let j = 0; j <= i; j++) {
      let sum = a[i * p + j];
      for (let k = 0; k < j; k++) sum -= l[i * p + k] * l[j * p + k];
      if (i === j) {
        if (!(sum > 0)) return undefined;
        l[i * p + i] = Math.sqrt(sum);
      } else l[i * p + j] = sum / l[j * p + j];
    }
  }
  return l;
}

function invert(a: Float64Array, p: number): Float64Array | undefined {
  const l = cholesky(a, p);
  if (!l) return undefined;
  const inverse = new Float64Array(p * p);
  for (let c = 0; c < p; c++) {
    const y = new Float64Array(p);
    for (let i = 0; i < p; i++) {
      let sum = i === c ? 1 : 0;
      for (let k = 0; k < i; k++) sum -= l[i * p + k] * y[k];
      y[i] = sum / l[i * p + i];
    }
    for (let i = p - 1; i >= 0; i--) {
      let sum = y[i];
      for (let k = i + 1; k < p; k++) sum -= l[k * p + i] * inverse[k * p + c];
      inverse[i * p + c] = sum / l[i * p + i];
    }
  }
  return inverse;
}

function logDeterminant(a: Float64Array, p: number): number {
  const l = cholesky(a, p);
  let sum = 0;
  for (let i = 0; i < p; i++) sum += l ? 2 * Math.log(l[i * p + i]) : Number.NEGATIVE_INFINITY;
  return sum;
}
