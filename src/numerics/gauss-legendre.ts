/** Points inside -1 to 1, ascending, and their weights: exact to degree 2 n - 1. */
export interface LegendreRule {
  readonly point: Float64Array;
  readonly weight: Float64Array;
}

/**
 * Gauss quadrature with n points, by Newton's method on the Legendre polynomial.
 * @see P.J. Davis, P. Rabinowitz, Methods of Numerical Integration, 2nd ed., Academic Press 1984, sec. 2.7
 */
export function gaussLegendre(n: number): LegendreRule {
  const point = new Float64Array(n);
  const weight = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let x = -Math.cos((Math.PI * (i + 0.75)) / (n + 0.5));
    let slope = 0;
    for (let step = 0; step < 50; step++) {
      let [before, p] = [0, 1];
      for (let k = 0; k < n; k++) [before, p] = [p, ((2 * k + 1) * x * p - k * before) / (k + 1)];
      slope = (n * (x * p - before)) / (x * x - 1);
      const change = p / slope;
      x -= change;
      if (Math.abs(change) < 1e-15) break;
    }
    point[i] = x;
    weight[i] = 2 / ((1 - x * x) * slope * slope);
  }
  return { point, weight };
}
