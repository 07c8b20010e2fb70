/** A residual function of few parameters inside a box. */
export interface Boxed {
  /** Residuals at p, or undefined where they do not exist there. The result may be a reused array. */
  readonly evaluate: (p: Float64Array) => ArrayLike<number> | undefined;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  /** Typical size of each parameter, above 0: steps do not fall below a fraction of it. */
  readonly typical: Float64Array;
}

/**
 * Forward differences, m x n row-major: the cheap Jacobian of a search, about 7 digits.
 * A step that would leave the box, or lands where there are no residuals, goes the other way; a column that no step can reach is 0.
 */
export function forwardJacobian(f: Boxed, p: Float64Array, here: Float64Array): Float64Array {
  const n = p.length;
  const m = here.length;
  const jacobian = new Float64Array(m * n);
  const at = p.slice();
  for (let j = 0; j < n; j++) {
    const room = Math.min(2 ** -26 * Math.max(Math.abs(p[j]), f.typical[j]), f.upper[j] - f.lower[j]);
    for (const h of p[j] + room <= f.upper[j] ? [room, -room, room / 64] : [-room, -room / 64]) {
      at[j] = Math.max(p[j] + h, f.lower[j]);
      const there = at[j] === p[j] ? undefined : f.evaluate(at);
      if (!there) continue;
      const step = at[j] - p[j];
      for (let i = 0; i < m; i++) jacobian[i * n + j] = (there[i] - here[i]) / step;
      break;
    }
    at[j] = p[j];
  }
  return jacobian;
}

/** Offsets in steps and their weights: fourth order about a point, second order beside a bound. */
const central = [
  [-2, 1 / 12],
  [-1, -8 / 12],
  [1, 8 / 12],
  [2, -1 / 12],
] as const;
const onward = [
  [0, -3 / 2],
  [1, 4 / 2],
  [2, -1 / 2],
] as const;
const backward = onward.map(([offset, weight]) => [-offset, -weight] as const);

/**
 * Central differences of fourth order (one-sided of second order at a bound), m x n row-major: the Jacobian that standard
 * errors are made of, about 11 digits of a smooth model.
 */
export function centralJacobian(f: Boxed, p: Float64Array, here: Float64Array): Float64Array {
  const n = p.length;
  const m = here.length;
  const jacobian = new Float64Array(m * n);
  const at = p.slice();
  const column = new Float64Array(m);
  for (let j = 0; j < n; j++) {
    const size = Math.max(Math.abs(p[j]), f.typical[j]);
    const wide = 2 ** -12 * size;
    const narrow = Math.min(2 ** -17 * size, (f.upper[j] - f.lower[j]) / 4);
    const ways = [
      [central, wide],
      [central, narrow],
      [onward, narrow],
      [backward, narrow],
    ] as const;
    for (const [stencil, h] of ways) {
      column.fill(0);
      const reached = stencil.every(([offset, weight]) => {
        at[j] = p[j] + offset * h;
        if (at[j] < f.lower[j] || at[j] > f.upper[j]) return false;
        const there = offset === 0 ? here : f.evaluate(at);
        if (!there) return false;
        for (let i = 0; i < m; i++) column[i] += weight * (there[i] - here[i]); // exactly 0 where nothing changes
        return true;
      });
      if (!reached) continue;
      for (let i = 0; i < m; i++) jacobian[i * n + j] = column[i] / h;
      break;
    }
    at[j] = p[j];
  }
  return jacobian;
}
