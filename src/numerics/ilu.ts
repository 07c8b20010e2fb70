import type { SparseRows } from "./sparse.js";

/** Unit lower and upper factors in the pattern of a matrix; the diagonal of the upper one inverted. */
export interface Ilu {
  readonly rows: SparseRows;
  /** Index of each row's diagonal entry. */
  readonly middle: Int32Array;
}

/**
 * Incomplete LU without fill-in. Exists for every M-matrix, no pivot vanishing, and in flow order it is near the whole one.
 * @param a columns ascending in every row, diagonal entries there
 * @returns undefined where a pivot is zero or not finite
 * @see J.A. Meijerink, H.A. van der Vorst, Math. Comp. 31 (1977) 148-162
 */
export function incompleteLu(a: SparseRows): Ilu | undefined {
  const { size, start, column } = a;
  const value = a.value.slice();
  const middle = new Int32Array(size);
  const place = new Int32Array(size).fill(-1);
  for (let i = 0; i < size; i++) {
    for (let e = start[i]; e < start[i + 1]; e++) place[column[e]] = e;
    let e = start[i];
    for (; e < start[i + 1] && column[e] < i; e++) {
      const k = column[e];
      value[e] *= value[middle[k]];
      const factor = value[e];
      for (let u = middle[k] + 1; u < start[k + 1]; u++) {
        const at = place[column[u]];
        if (at >= start[i]) value[at] -= factor * value[u];
      }
    }
    middle[i] = e;
    if (column[e] !== i || value[e] === 0 || !Number.isFinite(value[e])) return undefined;
    value[e] = 1 / value[e];
  }
  return { rows: { size, start, column, value }, middle };
}

/** x = U^-1 L^-1 b; no allocation, x may be b. */
export function solveIlu(
  { rows: { size, start, column, value }, middle }: Ilu,
  b: Float64Array,
  x: Float64Array,
): void {
  for (let i = 0; i < size; i++) {
    let sum = b[i];
    for (let e = start[i]; e < middle[i]; e++) sum -= value[e] * x[column[e]];
    x[i] = sum;
  }
  for (let i = size - 1; i >= 0; i--) {
    let sum = x[i];
    for (let e = middle[i] + 1; e < start[i + 1]; e++) sum -= value[e] * x[column[e]];
    x[i] = sum * value[middle[i]];
  }
}
