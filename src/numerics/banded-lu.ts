import { type DirectOptions, defaultTiny, type LinearSolver, measure, type Pattern, scales } from "./linear-solver.js";

/** How far entries reach below and above the diagonal. */
export interface Bandwidth {
  readonly below: number;
  readonly above: number;
}

export function bandwidth({ size, start, column }: Pattern): Bandwidth {
  let [below, above] = [0, 0];
  for (let i = 0; i < size; i++) {
    if (start[i] === start[i + 1]) continue;
    below = Math.max(below, i - column[start[i]]);
    above = Math.max(above, column[start[i + 1] - 1] - i);
  }
  return { below, above };
}

/**
 * Gaussian elimination with partial pivoting inside a band; memory and work grow with n times the width.
 * Row i is kept from column i - below on, with room for what pivoting pushes out to below + above.
 * @see G.H. Golub, C.F. Van Loan, Matrix Computations, 4th ed., Johns Hopkins 2013, sec. 4.3
 */
export function bandedSolver(pattern: Pattern, { tiny = defaultTiny }: DirectOptions = {}): LinearSolver {
  const { size: n, start, column } = pattern;
  const { below, above } = bandwidth(pattern);
  const reach = below + above;
  const width = below + reach + 1;
  const f = new Float64Array(n * width); // entry (i, j) at i * width + j - i + below
  const pivots = new Int32Array(n);
  const origin = new Int32Array(n);
  const scale = scales(n);
  return {
    size: n,
    factor(value) {
      if (!measure(pattern, value, undefined, scale)) return false;
      f.fill(0);
      for (let i = 0; i < n; i++) {
        origin[i] = i;
        for (let k = start[i]; k < start[i + 1]; k++) f[i * width + column[k] - i + below] += value[k];
      }
      for (let k = 0; k < n; k++) {
        const last = Math.min(n - 1, k + below);
        const end = Math.min(n - 1, k + reach);
        let pivot = k;
        let size = Math.abs(f[k * width + below]);
        for (let i = k + 1; i <= last; i++) {
          const here = Math.abs(f[i * width + k - i + below]);
          if (here > size) [pivot, size] = [i, here];
        }
        if (!(size > tiny * Math.min(scale.row[origin[pivot]], scale.column[k]))) return false;
        pivots[k] = pivot;
        const top = k * width - k + below;
        if (pivot !== k) {
          const other = pivot * width - pivot + below;
          for (let j = k; j <= end; j++) {
            const held = f[top + j];
            f[top + j] = f[other + j];
            f[other + j] = held;
          }
          const row = origin[k];
          origin[k] = origin[pivot];
          origin[pivot] = row;
        }
        for (let i = k + 1; i <= last; i++) {
          const row = i * width - i + below;
          if (f[row + k] === 0) continue;
          const l = f[row + k] / f[top + k];
          f[row + k] = l;
          for (let j = k + 1; j <= end; j++) f[row + j] -= l * f[top + j];
        }
      }
      return true;
    },
    solve(b) {
      // Multipliers stay where they were made, so rows are exchanged as the elimination goes along.
      for (let k = 0; k < n; k++) {
        const held = b[pivots[k]];
        b[pivots[k]] = b[k];
        b[k] = held;
        const last = Math.min(n - 1, k + below);
        for (let i = k + 1; i <= last; i++) b[i] -= f[i * width + k - i + below] * held;
      }
      for (let i = n - 1; i >= 0; i--) {
        const row = i * width - i + below;
        const end = Math.min(n - 1, i + reach);
        let sum = b[i];
        for (let j = i + 1; j <= end; j++) sum -= f[row + j] * b[j];
        b[i] = sum / f[row + i];
      }
      return true;
    },
  };
}
