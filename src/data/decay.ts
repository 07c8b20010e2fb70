/** The decay A exp(-rate u) that fits y best by least squares of y itself, so that noise about zero does no harm. */
export interface Decay {
  /** Per unit of u, with its standard error from the scatter of the points. */
  readonly rate: number;
  readonly rateError: number;
  readonly residual: number;
}

const golden = (Math.sqrt(5) - 1) / 2;

/** Decay over u (a time, or the logarithm of one: then it is a power law). The rate lies in [0, 30 / range of u]. */
export function decayOver(u: Float64Array, y: Float64Array): Decay {
  const n = u.length;
  const shift = u[0];
  const residualAt = (rate: number): number => {
    let [gg, gy, yy] = [0, 0, 0];
    for (let i = 0; i < n; i++) {
      const g = Math.exp(-rate * (u[i] - shift));
      gg += g * g;
      gy += g * y[i];
      yy += y[i] * y[i];
    }
    return Math.max(0, yy - (gy * gy) / gg);
  };
  let [low, high] = [0, 30 / (u[n - 1] - shift)];
  for (let k = 0; k < 60; k++) {
    const third = golden * (high - low);
    if (residualAt(high - third) < residualAt(low + third)) high = low + third;
    else low = high - third;
  }
  const rate = (low + high) / 2;
  let [gg, gy, gj, jj] = [0, 0, 0, 0];
  for (let i = 0; i < n; i++) {
    const g = Math.exp(-rate * (u[i] - shift));
    const j = g * (u[i] - shift);
    gg += g * g;
    gy += g * y[i];
    gj += g * j;
    jj += j * j;
  }
  const residual = residualAt(rate);
  const height = gy / gg;
  const spread = n > 2 ? residual / (n - 2) : Number.POSITIVE_INFINITY;
  return { rate, rateError: Math.sqrt(spread / (height * height * (jj - (gj * gj) / gg))), residual };
}

/** Integrals of t^k, k = 0 to 3. */
export type RawFour = readonly [number, number, number, number];

/** Of level * exp(-rate (t - end)) over [end, infinity). Closed forms, by parts. */
export function decayMoments(level: number, rate: number, end: number): RawFour {
  const [l, T] = [rate, end];
  const m0 = level / l;
  return [
    m0,
    m0 * (T + 1 / l),
    m0 * (T * T + (2 * T) / l + 2 / l ** 2),
    m0 * (T ** 3 + (3 * T * T) / l + (6 * T) / l ** 2 + 6 / l ** 3),
  ];
}
