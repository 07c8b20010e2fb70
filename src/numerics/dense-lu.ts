import { type DirectOptions, defaultTiny, type LinearSolver, measure, type Pattern, scales } from "./linear-solver.js";

/**
 * Gaussian elimination with partial pivoting on all n x n entries, in buffers made once: for small or full matrices.
 * @see G.H. Golub, C.F. Van Loan, Matrix Computations, 4th ed., Johns Hopkins 2013, sec. 3.4
 */
export function denseSolver(pattern: Pattern, { tiny = defaultTiny }: DirectOptions = {}): LinearSolver {
  const { size: n, start, column } = pattern;
  const f = new Float64Array(n * n);
  const rows = new Int32Array(n);
  const scale = scales(n);
  const x = new Float64Array(n);
  return {
    size: n,
    factor(value) {
      if (!measure(pattern, value, undefined, scale)) return false;
      f.fill(0);
      for (let i = 0; i < n; i++) {
        rows[i] = i;
        for (let k = start[i]; k < start[i + 1]; k++) f[i * n + column[k]] += value[k];
      }
      for (let k = 0; k < n; k++) {
        let pivot = k;
        for (let i = k + 1; i < n; i++) if (Math.abs(f[i * n + k]) > Math.abs(f[pivot * n + k])) pivot = i;
        const size = Math.abs(f[pivot * n + k]);
        if (!(size > tiny * Math.min(scale.row[rows[pivot]], scale.column[k]))) return false;
        if (pivot !== k) exchange(f, rows, n, k, pivot);
        const inverse = 1 / f[k * n + k];
        for (let i = k + 1; i < n; i++) {
          if (f[i * n + k] === 0) continue;
          const l = f[i * n + k] * inverse;
          f[i * n + k] = l;
          for (let j = k + 1; j < n; j++) f[i * n + j] -= l * f[k * n + j];
        }
      }
      return true;
    },
    solve(b) {
      for (let i = 0; i < n; i++) {
        let sum = b[rows[i]];
        for (let j = 0; j < i; j++) sum -= f[i * n + j] * x[j];
        x[i] = sum;
      }
      for (let i = n - 1; i >= 0; i--) {
        let sum = x[i];
        for (let j = i + 1; j < n; j++) sum -= f[i * n + j] * x[j];
        x[i] = sum / f[i * n + i];
      }
      b.set(x);
      return true;
    },
  };
}

function exchange(f: Float64Array, rows: Int32Array, n: number, a: number, b: number): void {
  for (let j = 0; j < n; j++) {
    const held = f[a * n + j];
    f[a * n + j] = f[b * n + j];
    f[b * n + j] = held;
  }
  const row = rows[a];
  rows[a] = rows[b];
  rows[b] = row;
}
