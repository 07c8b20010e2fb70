/** Sum of c_k T_k(x) by Clenshaw's recurrence; x from -1 to 1. */
export function evaluate(c: Float64Array, x: number): number {
  let [b1, b2] = [0, 0];
  for (let k = c.length - 1; k > 0; k--) [b1, b2] = [c[k] + 2 * x * b1 - b2, b1];
  return c[0] + x * b1 - b2;
}

/** Chebyshev points of the first kind, ascending: none at the ends, where a function may jump. */
export const points = (n: number): Float64Array =>
  Float64Array.from({ length: n }, (_, j) => -Math.cos((Math.PI * (2 * j + 1)) / (2 * n)));

/** Coefficients of the polynomial through values at `points(n)`. */
export function interpolate(values: ArrayLike<number>): Float64Array {
  const n = values.length;
  return Float64Array.from({ length: n }, (_, k) => {
    let sum = 0;
    for (let j = 0; j < n; j++) sum += values[j] * Math.cos((k * Math.PI * (2 * (n - 1 - j) + 1)) / (2 * n));
    return (k === 0 ? 1 : 2) * (sum / n);
  });
}

/** Coefficients of the integral of a series from x to 1. */
export function integralToEnd(c: Float64Array): Float64Array {
  const n = c.length;
  const at = (k: number): number => (k < n ? c[k] : 0);
  const out = new Float64Array(n + 1);
  for (let k = 1; k <= n; k++) out[k] = -((k === 1 ? 2 * at(0) : at(k - 1)) - at(k + 1)) / (2 * k);
  out[0] = -out.reduce((sum, x) => sum + x, 0);
  return out;
}
