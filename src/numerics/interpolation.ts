/** A curve through points. Before the first and after the last it keeps their value. */
export type Interpolant = (x: number) => number;

/**
 * Straight lines between points.
 * @param x ascending; two equal ones make a jump, at which the later value holds
 * @param y same length, at least 1
 * @throws RangeError where the lengths differ, are 0, or x falls
 */
export function linearInterpolant(x: ArrayLike<number>, y: ArrayLike<number>): Interpolant {
  const [xs, ys] = points(x, y, (a, b) => a <= b);
  const last = xs.length - 1;
  return (at) => {
    if (at < xs[0]) return ys[0];
    if (at >= xs[last]) return ys[last];
    const k = interval(xs, at);
    const share = (at - xs[k]) / (xs[k + 1] - xs[k]);
    return ys[k] * (1 - share) + ys[k + 1] * share;
  };
}

/**
 * A smooth curve (one continuous derivative) that rises and falls only where the points do.
 * @param x strictly ascending
 * @param y same length, at least 1
 * @throws RangeError where the lengths differ, are 0, or x does not rise
 * @see F.N. Fritsch, R.E. Carlson, SIAM J. Numer. Anal. 17 (1980) 238-246
 */
export function monotoneCubic(x: ArrayLike<number>, y: ArrayLike<number>): Interpolant {
  const [xs, ys] = points(x, y, (a, b) => a < b);
  const last = xs.length - 1;
  const slopes = monotoneSlopes(xs, ys);
  return (at) => {
    if (at < xs[0]) return ys[0];
    if (at >= xs[last]) return ys[last];
    const k = interval(xs, at);
    const h = xs[k + 1] - xs[k];
    const t = (at - xs[k]) / h;
    const u = 1 - t;
    const ends = ys[k] * (1 + 2 * t) * u * u + ys[k + 1] * t * t * (3 - 2 * t);
    return ends + h * t * u * (slopes[k] * u - slopes[k + 1] * t);
  };
}

/** Derivatives at the points: three-point parabolas, then drawn back into the circle of radius 3 where a piece is monotone. */
function monotoneSlopes(x: Float64Array, y: Float64Array): Float64Array {
  const last = x.length - 1;
  const d = new Float64Array(last + 1);
  if (last < 1) return d;
  const chord = Float64Array.from({ length: last }, (_, k) => (y[k + 1] - y[k]) / (x[k + 1] - x[k]));
  if (last === 1) return d.fill(chord[0]);
  for (let k = 1; k < last; k++) {
    const [a, b] = [x[k] - x[k - 1], x[k + 1] - x[k]];
    d[k] = chord[k - 1] * chord[k] > 0 ? (chord[k - 1] * b + chord[k] * a) / (a + b) : 0;
  }
  d[0] = endSlope(x[1] - x[0], x[2] - x[1], chord[0], chord[1]);
  d[last] = endSlope(x[last] - x[last - 1], x[last - 1] - x[last - 2], chord[last - 1], chord[last - 2]);
  for (let k = 0; k < last; k++) {
    if (chord[k] === 0) {
      d[k] = 0;
      d[k + 1] = 0;
      continue;
    }
    const [a, b] = [d[k] / chord[k], d[k + 1] / chord[k]];
    const radius = Math.hypot(a, b);
    if (radius > 3) {
      d[k] = (3 * a * chord[k]) / radius;
      d[k + 1] = (3 * b * chord[k]) / radius;
    }
  }
  return d;
}

/** Slope at an end from the parabola through three points, 0 where that would turn against the first chord. */
function endSlope(h: number, beyond: number, chord: number, next: number): number {
  const slope = chord + ((chord - next) * h) / (h + beyond);
  return slope * chord > 0 ? slope : 0;
}

/** k with x[k] <= at < x[k + 1]. */
function interval(x: Float64Array, at: number): number {
  let low = 0;
  let high = x.length - 1;
  while (high - low > 1) {
    const middle = (low + high) >> 1;
    if (x[middle] <= at) low = middle;
    else high = middle;
  }
  return low;
}

function points(
  x: ArrayLike<number>,
  y: ArrayLike<number>,
  inOrder: (a: number, b: number) => boolean,
): [Float64Array, Float64Array] {
  if (x.length === 0 || x.length !== y.length) throw new RangeError(`${x.length} abscissae and ${y.length} values`);
  for (let k = 1; k < x.length; k++) {
    if (!inOrder(x[k - 1], x[k])) throw new RangeError(`abscissa ${k} is ${x[k]}, after ${x[k - 1]}`);
  }
  return [Float64Array.from(x), Float64Array.from(y)];
}
