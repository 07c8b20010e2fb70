import { fullPattern, type Pattern } from "./linear-solver.js";

/** dy/dt = rhs(t, y) and what is known of its slope. */
export interface StiffProblem {
  readonly size: number;
  readonly rhs: (t: number, y: Float64Array, dy: Float64Array) => void;
  /**
   * Writes d dy_i / d y_j into entries set to 0 before: row by row as in `pattern`, or n x n row-major without one.
   * Left out: by differences.
   */
  readonly jacobian?: (t: number, y: Float64Array, entries: Float64Array) => void;
  /** Where the Jacobian may have entries; without it, everywhere. */
  readonly pattern?: Pattern;
}

export interface Jacobian {
  /** The pattern asked for, with the diagonal added. */
  readonly pattern: Pattern;
  readonly value: Float64Array;
  /** Where in `value` each diagonal entry is. */
  readonly diagonal: Int32Array;
  /** Evaluations of the right-hand side that one evaluation costs. */
  readonly cost: number;
  /**
   * Fills `value` at (t, y).
   * @param f rhs at (t, y)
   * @param scale size of a negligible change of each state, above 0
   * @param h step for which it is wanted: with f and scale it sets the width of differences
   */
  evaluate(t: number, y: Float64Array, f: Float64Array, scale: Float64Array, h: number): void;
}

/**
 * Prepares the Jacobian of a problem: buffers, pattern, and groups of columns that one difference serves.
 * @see P.N. Brown, G.D. Byrne, A.C. Hindmarsh, SIAM J. Sci. Stat. Comput. 10 (1989) 1038-1051 (width of differences)
 */
export function jacobianOf(problem: StiffProblem): Jacobian {
  const { size: n, rhs, jacobian } = problem;
  const asked = problem.pattern ?? fullPattern(n);
  const { pattern, place, diagonal } = withDiagonal(asked);
  const value = new Float64Array(pattern.column.length);
  if (jacobian) {
    const given = new Float64Array(asked.column.length);
    const evaluate = (t: number, y: Float64Array): void => {
      given.fill(0);
      jacobian(t, y, given);
      value.fill(0);
      for (let k = 0; k < given.length; k++) value[place[k]] += given[k];
    };
    return { pattern, value, diagonal, cost: 0, evaluate };
  }
  const { group, count } = separateColumns(pattern);
  const { first, entry, row } = byGroup(pattern, group, count);
  const step = new Float64Array(n);
  const moved = new Float64Array(n);
  const there = new Float64Array(n);
  const evaluate = (t: number, y: Float64Array, f: Float64Array, scale: Float64Array, h: number): void => {
    let square = 0;
    for (let j = 0; j < n; j++) square += (f[j] / scale[j]) ** 2;
    // Below this part of the scale, rounding of f would drown the difference.
    const noise = 1000 * Number.EPSILON * Math.abs(h) * Math.sqrt(n * square);
    for (let j = 0; j < n; j++) {
      let width = Math.max(rootOfRounding * Math.max(Math.abs(y[j]), Math.abs(h * f[j])), noise * scale[j]);
      if (!(width > 1e-140)) width = rootOfRounding;
      // Towards where the state goes: a concentration at zero is not pushed below it.
      step[j] = y[j] + (f[j] < 0 ? -width : width) - y[j];
    }
    for (let g = 0; g < count; g++) {
      for (let j = 0; j < n; j++) moved[j] = group[j] === g ? y[j] + step[j] : y[j];
      rhs(t, moved, there);
      for (let e = first[g]; e < first[g + 1]; e++) {
        const k = entry[e];
        value[k] = (there[row[e]] - f[row[e]]) / step[pattern.column[k]];
      }
    }
  };
  return { pattern, value, diagonal, cost: count, evaluate };
}

const rootOfRounding = 2 ** -26;

/** Entries of a pattern by the group of their column, with their rows. */
function byGroup({ size: n, start, column }: Pattern, group: Int32Array, count: number) {
  const first = new Int32Array(count + 1);
  for (const j of column) first[group[j] + 1]++;
  for (let g = 0; g < count; g++) first[g + 1] += first[g];
  const next = first.slice(0, count);
  const [entry, row] = [new Int32Array(column.length), new Int32Array(column.length)];
  for (let i = 0; i < n; i++) {
    for (let k = start[i]; k < start[i + 1]; k++) {
      const e = next[group[column[k]]]++;
      entry[e] = k;
      row[e] = i;
    }
  }
  return { first, entry, row };
}

function withDiagonal({ size: n, start, column }: Pattern) {
  const rows: number[] = [];
  const begins = new Int32Array(n + 1);
  const diagonal = new Int32Array(n);
  const place = new Int32Array(column.length);
  for (let i = 0; i < n; i++) {
    const wanted = new Set<number>([i]);
    for (let k = start[i]; k < start[i + 1]; k++) wanted.add(column[k]);
    const sorted = [...wanted].sort((a, b) => a - b);
    const at = new Map(sorted.map((j, k) => [j, begins[i] + k]));
    for (let k = start[i]; k < start[i + 1]; k++) place[k] = at.get(column[k]) ?? 0;
    diagonal[i] = at.get(i) ?? 0;
    rows.push(...sorted);
    begins[i + 1] = rows.length;
  }
  return { pattern: { size: n, start: begins, column: Int32Array.from(rows) }, place, diagonal };
}

/**
 * Groups of columns no two of which share a row, greedily: one difference serves a whole group.
 * @see A.R. Curtis, M.J.D. Powell, J.K. Reid, IMA J. Appl. Math. 13 (1974) 117-119
 */
export function separateColumns({ size: n, start, column }: Pattern): { group: Int32Array; count: number } {
  if (column.length === n * n) return { group: Int32Array.from({ length: n }, (_, j) => j), count: n };
  const group = new Int32Array(n).fill(-1);
  const rowsOf: number[][] = Array.from({ length: n }, () => []);
  for (let i = 0; i < n; i++) for (let k = start[i]; k < start[i + 1]; k++) rowsOf[column[k]].push(i);
  const taken = new Int32Array(n).fill(-1);
  let count = 0;
  for (let j = 0; j < n; j++) {
    for (const i of rowsOf[j])
      for (let k = start[i]; k < start[i + 1]; k++) if (group[column[k]] >= 0) taken[group[column[k]]] = j;
    let g = 0;
    while (taken[g] === j) g++;
    group[j] = g;
    count = Math.max(count, g + 1);
  }
  return { group, count };
}
