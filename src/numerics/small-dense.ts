/**
 * Solves A X = B for a small dense matrix at a[at ...], n x n row-major, and `columns` right-hand sides at b[to ...], n x
 * columns row-major, by elimination with partial pivoting. Both are overwritten, B by X; nothing is allocated.
 * @returns false where a pivot vanishes or is not finite
 */
export function solveSmall(
  a: Float64Array,
  at: number,
  n: number,
  b: Float64Array,
  to: number,
  columns: number,
): boolean {
  for (let k = 0; k < n; k++) {
    let pivot = k;
    for (let i = k + 1; i < n; i++) if (Math.abs(a[at + i * n + k]) > Math.abs(a[at + pivot * n + k])) pivot = i;
    if (pivot !== k) {
      for (let j = k; j < n; j++) swap(a, at + k * n + j, at + pivot * n + j);
      for (let j = 0; j < columns; j++) swap(b, to + k * columns + j, to + pivot * columns + j);
    }
    const head = a[at + k * n + k];
    if (head === 0 || !Number.isFinite(head)) return false;
    for (let i = k + 1; i < n; i++) {
      const factor = a[at + i * n + k] / head;
      if (factor === 0) continue;
      for (let j = k + 1; j < n; j++) a[at + i * n + j] -= factor * a[at + k * n + j];
      for (let j = 0; j < columns; j++) b[to + i * columns + j] -= factor * b[to + k * columns + j];
    }
  }
  for (let k = n - 1; k >= 0; k--) {
    const head = a[at + k * n + k];
    for (let j = 0; j < columns; j++) {
      let sum = b[to + k * columns + j];
      for (let i = k + 1; i < n; i++) sum -= a[at + k * n + i] * b[to + i * columns + j];
      b[to + k * columns + j] = sum / head;
    }
  }
  return true;
}

function swap(x: Float64Array, i: number, j: number): void {
  const held = x[i];
  x[i] = x[j];
  x[j] = held;
}
