/** By interval, one fewer than the points: 1 where the curve is smooth between its ends, 0 where only a line may be drawn. */
export type Smooth = Uint8Array;

/**
 * The slope at point i as a sum over points: that of the parabola through it and its two neighbours, or through the first
 * three of a smooth stretch at its ends; of the line where the stretch is one interval. Tells `add` each point with its weight.
 */
export function slopeWeights(
  t: Float64Array,
  smooth: Smooth,
  i: number,
  add: (point: number, weight: number) => void,
): void {
  const left = i > 0 && smooth[i - 1] === 1;
  const right = i + 1 < t.length && smooth[i] === 1;
  if (left && right) parabola(t, i - 1, i, add);
  else if (right && i + 2 < t.length && smooth[i + 1] === 1) parabola(t, i, i, add);
  else if (left && i > 1 && smooth[i - 2] === 1) parabola(t, i - 2, i, add);
  else if (left || right) {
    const a = right ? i : i - 1;
    const h = t[a + 1] - t[a];
    add(a, -1 / h);
    add(a + 1, 1 / h);
  }
}

/** Slope at point `at` of the parabola through point a and the two after it. */
function parabola(t: Float64Array, a: number, at: number, add: (point: number, weight: number) => void): void {
  const [x, p, q, r] = [2 * t[at], t[a], t[a + 1], t[a + 2]];
  add(a, (x - q - r) / ((p - q) * (p - r)));
  add(a + 1, (x - p - r) / ((q - p) * (q - r)));
  add(a + 2, (x - p - q) / ((r - p) * (r - q)));
}

/** The slope at every point, unit of y per unit of t. */
export function slopesOf(t: Float64Array, y: Float64Array, smooth: Smooth): Float64Array {
  const slope = new Float64Array(t.length);
  for (let i = 0; i < t.length; i++)
    slopeWeights(t, smooth, i, (k, by) => {
      slope[i] += by * y[k];
    });
  return slope;
}
