import type { SparseRows } from "./sparse.js";

/** Where a sparse matrix may have entries: row i has columns column[k], ascending, for start[i] <= k < start[i+1]. */
export type Pattern = Omit<SparseRows, "value">;

/**
 * One way to solve A x = b for many matrices of one pattern. All ways keep the promises of
 * `test/numerics/linear-solver-contract.ts`; none changes the entries it is given.
 */
export interface LinearSolver {
  readonly size: number;
  /**
   * Takes the entries, in the order of the pattern.
   * @returns false where the matrix is singular to rounding or has an entry that is not finite
   */
  factor(value: Float64Array): boolean;
  /**
   * Solves in place: b becomes x. After a `factor` that returned true. No allocation.
   * @returns false where an iterative way did not reach its goal; b is then its best
   */
  solve(b: Float64Array): boolean;
}

/** The same for a complex matrix and right-hand side, real and imaginary parts apart. */
export interface ComplexLinearSolver {
  readonly size: number;
  factor(re: Float64Array, im: Float64Array): boolean;
  solve(re: Float64Array, im: Float64Array): boolean;
}

export interface DirectOptions {
  /**
   * A pivot up to this, relative to the largest entry of its row and of its column, counts as zero; default 4 roundings.
   * 0 lets everything pass but true zeros: right where a near-singular matrix only steers an iteration.
   */
  readonly tiny?: number;
  /**
   * For sparse elimination: the diagonal is always the pivot, whatever came before, so that the factors depend on their
   * matrix alone. Right for balances, whose rows are dominated by it. Default false.
   */
  readonly onDiagonal?: boolean;
  /** For sparse elimination: the order of columns, where one was found before for this pattern (`minimumDegree`). */
  readonly order?: Int32Array;
}

export const defaultTiny = 4 * Number.EPSILON;

/** Largest magnitude in each row and column of a matrix; a number that is not finite shows up in both. */
export interface Scales {
  readonly row: Float64Array;
  readonly column: Float64Array;
}

export const scales = (size: number): Scales => ({ row: new Float64Array(size), column: new Float64Array(size) });

/** Measures a real matrix, or a complex one by the larger of its two parts. @returns false where an entry is not finite */
export function measure(
  pattern: Pattern,
  re: Float64Array,
  im: Float64Array | undefined,
  { row, column }: Scales,
): boolean {
  const { size, start, column: at } = pattern;
  row.fill(0);
  column.fill(0);
  for (let i = 0; i < size; i++) {
    for (let k = start[i]; k < start[i + 1]; k++) {
      const value = im ? Math.max(Math.abs(re[k]), Math.abs(im[k])) : Math.abs(re[k]);
      if (!(value < Number.POSITIVE_INFINITY)) return false;
      if (value > row[i]) row[i] = value;
      if (value > column[at[k]]) column[at[k]] = value;
    }
  }
  return true;
}

/** Whether all entries are finite: what is left of `measure` where no pivot counts as tiny. */
export function finite(re: Float64Array, im?: Float64Array): boolean {
  for (let k = 0; k < re.length; k++) if (!(Math.abs(re[k]) < Number.POSITIVE_INFINITY)) return false;
  return im === undefined || finite(im);
}

/** The pattern with every entry of an n x n matrix. */
export function fullPattern(n: number): Pattern {
  return {
    size: n,
    start: Int32Array.from({ length: n + 1 }, (_, i) => i * n),
    column: Int32Array.from({ length: n * n }, (_, k) => k % n),
  };
}
