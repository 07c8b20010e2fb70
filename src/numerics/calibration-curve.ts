import { studentTQuantile } from "./distributions.js";

/** A curve y(x) through standards, and its inverse with what the scatter of the standards leaves open. */
export interface CalibrationCurve {
  /** 1: a straight line; 2: a parabola. */
  readonly degree: 1 | 2;
  readonly standards: number;
  /** Standard deviation of one standard about the curve, in y. */
  readonly spread: number;
  /** Least and greatest y of the standards. */
  readonly range: readonly [number, number];
  /** y at x. */
  at(x: number): number;
  /** x at y, on the side of the curve where the standards lie; NaN where the curve never gets there. */
  invert(y: number): number;
  /** dx/dy at y. */
  slope(y: number): number;
  /** Change of x at y for one standard deviation of each independent coefficient; they add in squares. */
  doubts(y: number): number[];
}

/** Why standards make no curve to invert. `at`: the x at which it turns round. */
export type NoCurve = { readonly is: "flat" } | { readonly is: "turns"; readonly at: number };

/**
 * Least squares of y on x in orthogonal polynomials, whose coefficients are independent of one another (G. E. Forsythe,
 * J. SIAM 5 (1957) 74-88). The square term is taken where 5 standards or more show it with 95 % confidence.
 * @param x  known values, 3 or more, not all the same
 * @param y  what was read there, all with one unknown spread
 */
export function calibrationCurve(x: ArrayLike<number>, y: ArrayLike<number>): CalibrationCurve | NoCurve {
  const n = x.length;
  const xs = Array.from(x);
  const ys = Array.from(y);
  const [low, high] = [Math.min(...xs), Math.max(...xs)];
  const [middle, half] = [(low + high) / 2, (high - low) / 2];
  const u = xs.map((v) => (v - middle) / half);
  const p1 = mean(u);
  const one = u.map((v) => v - p1);
  const [s1, alpha] = [
    dot(one, one),
    dot(
      u,
      one.map((v) => v * v),
    ) / dot(one, one),
  ];
  const beta = s1 / n;
  const two = u.map((v, i) => (v - alpha) * one[i] - beta);
  const s2 = dot(two, two);
  const c = [mean(ys), dot(one, ys) / s1, n >= 4 ? dot(two, ys) / s2 : 0];
  const spreadOf = (degree: number): number => {
    const rest = ys.map((v, i) => v - c[0] - c[1] * one[i] - (degree === 2 ? c[2] * two[i] : 0));
    return Math.sqrt(dot(rest, rest) / (n - 1 - degree));
  };
  const bent =
    n >= 5 && Math.abs(c[2]) * Math.sqrt(s2) > studentTQuantile(0.975, n - 3) * spreadOf(2) + 1e-9 * Math.abs(c[1]);
  const degree = bent ? 2 : 1;
  const [least, most] = [Math.min(...ys), Math.max(...ys)];
  // Rounding is no scatter.
  const spread = spreadOf(degree) > 1e-12 * (most - least) ? spreadOf(degree) : 0;
  if (!bent) c[2] = 0;
  const sd = [spread / Math.sqrt(n), spread / Math.sqrt(s1), bent ? spread / Math.sqrt(s2) : 0];
  // y = k0 + k1 u + k2 u^2
  const k2 = c[2];
  const k1 = c[1] - k2 * (alpha + p1);
  const k0 = c[0] - c[1] * p1 + k2 * (alpha * p1 - beta);
  const turn = k2 === 0 ? Number.POSITIVE_INFINITY : -k1 / (2 * k2);
  if (Math.abs(turn) <= 1 + 1e-9) return { is: "turns", at: middle + half * turn };
  if (!bent && !(Math.abs(c[1]) > 3 * sd[1])) return { is: "flat" };
  const side = Math.sign(k1);
  const local = (v: number): number => {
    if (k2 === 0) return (v - k0) / k1;
    const root = k1 * k1 + 4 * k2 * (v - k0);
    // The root on the side of the standards, without cancellation.
    return root < 0 ? Number.NaN : (2 * (v - k0)) / (k1 + side * Math.sqrt(root));
  };
  const steep = (at: number): number => (k1 + 2 * k2 * at) / half;
  return {
    degree,
    standards: n,
    spread,
    range: [least, most],
    at: (v) => {
      const w = (v - middle) / half;
      return k0 + k1 * w + k2 * w * w;
    },
    invert: (v) => middle + half * local(v),
    slope: (v) => 1 / steep(local(v)),
    doubts: (v) => {
      const w = local(v);
      const parts = [1, w - p1, (w - alpha) * (w - p1) - beta];
      return parts.slice(0, degree + 1).map((part, k) => (-part * sd[k]) / steep(w));
    },
  };
}

const dot = (a: readonly number[], b: readonly number[]): number => a.reduce((sum, v, i) => sum + v * b[i], 0);
const mean = (a: readonly number[]): number => a.reduce((sum, v) => sum + v, 0) / a.length;
