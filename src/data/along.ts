import { type Chain, correlate, correlationTimes, links } from "../numerics/autoregression.js";
import { decayOver } from "./decay.js";
import { extent } from "./extent.js";

/** Noise on a smooth stretch of a curve, told together with the curve. */
export interface Along {
  readonly points: number;
  /** One standard deviation of a point, unit of the curve. */
  readonly sd: number;
  /** How far errors hang together, as exp(-gap / time), s; 0 where they do not. */
  readonly time: number;
}

/** A stretch needs so many points, and no more are looked at. */
const [fewest, most] = [24, 2000];
/** Wander must be so many times as sure as a column of the curve: each curve that is tried gives it a chance to seem so. */
const sure = 3;
/** Share of the range of the stretch under which what is left over is not looked at. */
const negligible = 2e-4;
/** Columns of the splines that are tried, and points that each must have. */
const columns = [4, 6, 8, 11, 15, 20, 28, 40, 56];
const perColumn = 4;
/** Curves of more columns are there to follow sharp ones; wander beside them is not told. */
const mostBeside = 20;

/**
 * Scatter of the points about a smooth curve, and how neighbouring errors hang together. Differences of neighbours cannot tell:
 * errors that hang together make them small. Here the curve is a decay or a cubic spline; how many columns it needs, and whether
 * errors hang together besides, is chosen at once by BIC of the likelihood, restricted to what the curve leaves, so that a curve that
 * is not followed is not taken for wander, nor wander for a curve.
 * @returns undefined where the stretch has too few points to tell
 * @see G. Schwarz, Ann. Statist. 6 (1978) 461-464
 */
export function noiseAlong(t: Float64Array, y: Float64Array): Along | undefined {
  if (t.length < fewest) return undefined;
  const [time, value] = [t.subarray(-most), y.subarray(-most)];
  const n = time.length;
  const chain: Chain = {
    rows: Int32Array.from({ length: n }, (_, i) => i),
    gaps: time.map((s, i) => (i > 0 ? s - time[i - 1] : 0)),
  };
  if (chain.gaps.some((gap, i) => i > 0 && !(gap > 0))) return undefined;
  let best: { score: number; residual: Float64Array; basis: Float64Array[]; time: number } | undefined;
  for (const basis of smoothCurves(time, value)) {
    const residual = leftOf(value, basis);
    const sum = dot(residual, residual);
    if (!(sum > 0)) return undefined;
    const beside = basis.length <= mostBeside ? correlationTimes(residual, basis, [chain])[0] : { time: 0, gain: 0 };
    const k = basis.length + 1;
    if (k > n - 3) break;
    // Of few points many columns take more than their number: the second-order term of AICc beside the price of BIC.
    const plain = n * Math.log(sum / n) + k * Math.log(n) + (2 * k * (k + 1)) / (n - k - 1);
    for (const [score, told] of [
      [plain, 0],
      [plain - beside.gain + sure * Math.log(n), beside.time],
    ])
      if (!best || score < best.score) best = { score, residual, basis, time: told };
  }
  // The richest curve that was tried: a richer one might follow the points still better.
  if (!best || best.basis.length > Math.min(columns[columns.length - 2], n / perColumn / 1.5)) return undefined;
  const { residual, basis, time: memory } = best;
  const [low, high] = extent(value);
  const off = dot(residual, residual);
  // So small a rest may as well be what the curve tried does not follow.
  if (off < n * (negligible * (high - low)) ** 2)
    return { points: n, time: 0, sd: Math.sqrt(off / (n - basis.length)) };
  return { points: n, time: memory, sd: Math.sqrt(dot(residual, residual) / leftover(chain, basis, memory)) };
}

/** What the sum of squares of residuals is of the variance: the trace of what the basis leaves of the correlations. */
function leftover(chain: Chain, basis: readonly Float64Array[], time: number): number {
  const n = chain.gaps.length;
  if (!(time > 0)) return n - basis.length;
  const phi = links(chain, time);
  const spread = new Float64Array(n);
  const taken = basis.reduce((sum, q) => {
    correlate(chain.rows, phi, q, spread);
    return sum + dot(q, spread);
  }, 0);
  return Math.max(1, n - taken);
}

const dot = (a: Float64Array, b: Float64Array): number => {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
};

function leftOf(value: Float64Array, basis: readonly Float64Array[]): Float64Array {
  const left = value.slice();
  for (const q of basis) {
    const share = dot(q, left);
    for (let i = 0; i < left.length; i++) left[i] -= share * q[i];
  }
  return left;
}

/** Orthonormal columns of the curves that are tried: one decay over a constant and over a line, then splines. */
function* smoothCurves(time: Float64Array, value: Float64Array): Generator<Float64Array[]> {
  const n = time.length;
  const since = time.map((t) => (t - time[0]) / (time[n - 1] - time[0]));
  const { rate } = decayOver(since, value);
  const decay = since.map((s) => Math.exp(-rate * s));
  const bent = decay.map((d, i) => d * since[i]);
  const one = new Float64Array(n).fill(1);
  yield orthonormal([decay, bent, one]);
  yield orthonormal([decay, bent, bent.map((b, i) => b * since[i]), one, since]);
  // Knots evenly apart, or closer where a decay begins.
  for (const place of [since, since.map((s) => Math.log1p(50 * s) / Math.log(51))])
    for (const count of columns) if (count * perColumn <= n) yield orthonormal(splines(place, count));
}

function orthonormal(columns: readonly Float64Array[]): Float64Array[] {
  const basis: Float64Array[] = [];
  for (const column of columns) {
    const left = leftOf(leftOf(column, basis), basis);
    const [size, whole] = [left, column].map((v) => Math.sqrt(dot(v, v)));
    if (size > 1e-9 * whole) basis.push(left.map((v) => v / size));
  }
  return basis;
}

/** Cubic B-splines with evenly spaced knots from 0 to 1 (C. de Boor, A Practical Guide to Splines, 1978). */
function splines(place: Float64Array, count: number): Float64Array[] {
  return Array.from({ length: count }, (_, j) => place.map((x) => bump(x * (count - 3) - j + 3)));
}

/** The cubic B-spline over knots 0 to 4. */
function bump(x: number): number {
  const from = x > 2 ? 4 - x : x;
  if (!(from > 0)) return 0;
  return from < 1 ? from ** 3 / 6 : 2 / 3 - ((2 - from) ** 2 * from) / 2;
}
