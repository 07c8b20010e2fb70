/** Points and weights of Gauss-Lobatto-Legendre quadrature on [-1, 1], and the slopes of the polynomials through them. */
export interface LobattoRule {
  readonly degree: number;
  /** degree + 1 points, ends included, ascending. */
  readonly x: Float64Array;
  readonly weight: Float64Array;
  /** Row-major: slope at x_i of the polynomial that is 1 at x_j and 0 at the others. */
  readonly slope: Float64Array;
}

/** Legendre polynomials of degree p - 1 and p at x, by their recurrence. */
function legendre(p: number, x: number): [number, number] {
  let [before, now] = [0, 1];
  for (let k = 0; k < p; k++) [before, now] = [now, ((2 * k + 1) * x * now - k * before) / (k + 1)];
  return [before, now];
}

/**
 * The rule of a degree from 1 on; exact for polynomials up to degree 2 p - 1.
 * @see C. Canuto, M.Y. Hussaini, A. Quarteroni, T.A. Zang, Spectral Methods: Fundamentals in Single Domains, Springer 2006, sec. 2.3
 */
export function gaussLobatto(degree: number): LobattoRule {
  const p = degree;
  const n = p + 1;
  const x = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let z = -Math.cos((Math.PI * i) / p);
    // Newton's method on (1 - x^2) P' through p (P_{p-1} - x P_p); the ends are exact from the start.
    for (let round = 0; round < 60 && i > 0 && i < p; round++) {
      const [low, high] = legendre(p, z);
      const step = (z * high - low) / ((p + 1) * high);
      z -= step;
      if (Math.abs(step) < 4 * Number.EPSILON) break;
    }
    x[i] = i === 0 ? -1 : i === p ? 1 : z;
  }
  for (let i = 0; i < n; i++) x[i] = (x[i] - x[p - i]) / 2 || 0;
  for (let i = 0; i < n / 2; i++) x[p - i] = -x[i];
  const at = Float64Array.from(x, (z) => legendre(p, z)[1]);
  const weight = Float64Array.from(at, (v) => 2 / (p * (p + 1) * v * v));
  const slope = new Float64Array(n * n);
  for (let i = 0; i < n; i++) {
    let sum = 0;
    for (let j = 0; j < n; j++) {
      if (i === j) continue;
      slope[i * n + j] = at[i] / at[j] / (x[i] - x[j]);
      sum += slope[i * n + j];
    }
    slope[i * n + i] = -sum; // a constant has no slope
  }
  return { degree, x, weight, slope };
}
