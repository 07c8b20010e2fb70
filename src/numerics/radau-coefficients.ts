import { denseComplexSolver } from "./complex-lu.js";
import { denseSolver } from "./dense-lu.js";
import { fullPattern } from "./linear-solver.js";

/** What a step of the s-stage Radau IIA method (order 2s - 1, L-stable) is made of. Matrices are row-major, s x s. */
export interface RadauCoefficients {
  readonly stages: number;
  /** Places of the stages in the step; the last is 1. */
  readonly c: Float64Array;
  /** A^-1: h f(stage i) = sum over j of inverse[i, j] z_j, where z_j is what stage j adds to the state at the start. */
  readonly inverse: Float64Array;
  /** Real eigenvalue of A^-1 (s odd). */
  readonly real: number;
  /** Complex pairs of eigenvalues, re + i im and its conjugate, im > 0. */
  readonly pairs: readonly { readonly re: number; readonly im: number }[];
  /**
   * Columns: the real eigenvector, then real and imaginary part of one per pair. In w = T^-1 z the stages fall apart into one
   * real system and one complex per pair, with matrix (re + i im)/h - J for w_k + i w_(k+1).
   */
  readonly t: Float64Array;
  readonly tInverse: Float64Array;
  /** Weights of z_j / h beside f(start) in the embedded error estimate of order s. */
  readonly error: Float64Array;
  /** Weights of z_j in what the polynomial through the stages alone misses the start by. */
  readonly miss: Float64Array;
  /** Largest error of that polynomial between first and last stage, relative to what it misses the start by. */
  readonly missWithin: number;
  /** Largest |u (u - c_1) ... (u - c_s)| in the step: with y^(s+1) h^(s+1) / (s+1)!, the error of interpolation. */
  readonly nodal: number;
}

/**
 * Computes the coefficients for s = 1, 3, 5 or 7 stages.
 * @see E. Hairer, G. Wanner, Solving Ordinary Differential Equations II, 2nd ed., Springer 1996, sec. IV.5 and IV.8;
 *      J. Comput. Appl. Math. 111 (1999) 93-111
 */
export function radauCoefficients(stages: 1 | 3 | 5 | 7): RadauCoefficients {
  const s = stages;
  const c = radauNodes(s);
  const inverse = new Float64Array(s * s);
  const error = new Float64Array(s);
  const miss = new Float64Array(s);
  const nodes = [0, ...c];
  for (let j = 0; j < s; j++) {
    for (let i = 0; i < s; i++) inverse[i * s + j] = lagrangeSlope(nodes, j + 1, i + 1);
    error[j] = -lagrangeSlope(nodes, j + 1, 0);
    miss[j] = c.reduce((product, x, m) => (m === j ? product : (product * x) / (x - c[j])), 1);
  }
  const eigenvalues = eigenvaluesOfInverse(s);
  const t = new Float64Array(s * s);
  const pairs: { re: number; im: number }[] = [];
  let real = Number.NaN;
  for (const { re, im } of eigenvalues) {
    if (im < 0) continue;
    const isReal = im < 1e-8;
    const column = isReal ? 0 : 1 + 2 * pairs.length;
    // The eigenvector of the conjugate makes the pair's system (re + i im)/h - J.
    const v = eigenvector(inverse, s, re, isReal ? 0 : -im);
    for (let i = 0; i < s; i++) {
      t[i * s + column] = v.re[i];
      if (!isReal) t[i * s + column + 1] = v.im[i];
    }
    // The last component is 1, so the last row of A^-1 v is the eigenvalue that goes with v, to rounding.
    let [exactRe, exactIm] = [0, 0];
    for (let j = 0; j < s; j++) {
      exactRe += inverse[(s - 1) * s + j] * v.re[j];
      exactIm -= inverse[(s - 1) * s + j] * v.im[j];
    }
    if (isReal) real = exactRe;
    else pairs.push({ re: exactRe, im: exactIm });
  }
  const product = (u: number): number => {
    let sofar = 1;
    for (let j = 0; j < s; j++) sofar *= u - c[j];
    return Math.abs(sofar);
  };
  let [largest, nodal] = [0, 0];
  for (let u = 0; u <= 1; u += 1 / 1024) {
    if (u >= c[0]) largest = Math.max(largest, product(u));
    nodal = Math.max(nodal, u * product(u));
  }
  const missWithin = largest / product(0);
  return { stages: s, c, inverse, real, pairs, t, tInverse: inverted(t, s), error, miss, missWithin, nodal };
}

/** Zeros of P_s - P_(s-1) on [0, 1] (Legendre), the last at 1. */
function radauNodes(s: number): Float64Array {
  const f = (u: number): number => {
    let before = 1;
    let here = 2 * u - 1;
    for (let k = 1; k < s; k++) {
      const next = ((2 * k + 1) * (2 * u - 1) * here - k * before) / (k + 1);
      before = here;
      here = next;
    }
    return here - before;
  };
  const c = new Float64Array(s);
  c[s - 1] = 1;
  const places = 400;
  let count = 0;
  for (let k = 0; k < places && count < s - 1; k++) {
    let [low, high] = [k / places, (k + 1) / places];
    if (f(low) * f(high) > 0) continue;
    for (let halving = 0; halving < 60; halving++) {
      const middle = (low + high) / 2;
      if (f(low) * f(middle) <= 0) high = middle;
      else low = middle;
    }
    c[count++] = (low + high) / 2;
  }
  return c;
}

/** Slope at node i of the polynomial that is 1 at node j and 0 at the others. */
function lagrangeSlope(nodes: readonly number[], j: number, i: number): number {
  if (i === j) return nodes.reduce((sum, x, m) => (m === j ? sum : sum + 1 / (nodes[j] - x)), 0);
  let product = 1 / (nodes[j] - nodes[i]);
  for (const [m, x] of nodes.entries()) if (m !== i && m !== j) product *= (nodes[i] - x) / (nodes[j] - x);
  return product;
}

/** Zeros of the denominator of the (s - 1, s) Padé approximation of exp, by simultaneous iteration (Durand and Kerner). */
function eigenvaluesOfInverse(s: number): { re: number; im: number }[] {
  // det(1 - z A) = sum of q_j z^j; divided by q_s it is monic.
  const q = [1];
  for (let j = 0; j < s; j++) q.push((-q[j] * (s - j)) / ((2 * s - 1 - j) * (j + 1)));
  const z = Array.from({ length: s }, (_, k) => ({
    re: 2 * s * Math.cos((2 * Math.PI * k + 0.7) / s),
    im: 2 * s * Math.sin((2 * Math.PI * k + 0.7) / s),
  }));
  let moving = true;
  for (let round = 0; moving && round < 200; round++) {
    moving = false;
    for (const [k, at] of z.entries()) {
      let value = { re: 1, im: 0 };
      for (let j = s - 1; j >= 0; j--) value = plus(times(value, at), { re: q[j] / q[s], im: 0 });
      for (const [m, other] of z.entries())
        if (m !== k) value = over(value, plus(at, { re: -other.re, im: -other.im }));
      z[k] = plus(at, { re: -value.re, im: -value.im });
      if (Math.hypot(value.re, value.im) > 4 * Number.EPSILON * Math.hypot(at.re, at.im)) moving = true;
    }
  }
  return z.sort((a, b) => Math.abs(a.im) - Math.abs(b.im));
}

interface Pair {
  readonly re: number;
  readonly im: number;
}
const plus = (a: Pair, b: Pair): Pair => ({ re: a.re + b.re, im: a.im + b.im });
const times = (a: Pair, b: Pair): Pair => ({ re: a.re * b.re - a.im * b.im, im: a.re * b.im + a.im * b.re });
function over(a: Pair, b: Pair): Pair {
  const square = b.re * b.re + b.im * b.im;
  return { re: (a.re * b.re + a.im * b.im) / square, im: (a.im * b.re - a.re * b.im) / square };
}

/** By inverse iteration; the last component becomes 1. */
function eigenvector(a: Float64Array, s: number, re: number, im: number): { re: Float64Array; im: Float64Array } {
  const solver = denseComplexSolver(fullPattern(s), { tiny: 0 });
  const nudged = 1 + 1e-10; // or the matrix could be singular
  const shiftedRe = a.map((v, k) => (k % (s + 1) === 0 ? v - re * nudged : v));
  const shiftedIm = a.map((_, k) => (k % (s + 1) === 0 ? -im * nudged : 0));
  solver.factor(shiftedRe, shiftedIm);
  const vRe = new Float64Array(s).fill(1);
  const vIm = new Float64Array(s);
  for (let round = 0; round < 4; round++) {
    solver.solve(vRe, vIm);
    const last = { re: vRe[s - 1], im: vIm[s - 1] };
    for (let i = 0; i < s; i++) {
      const scaled = over({ re: vRe[i], im: vIm[i] }, last);
      vRe[i] = scaled.re;
      vIm[i] = scaled.im;
    }
  }
  return { re: vRe, im: vIm };
}

function inverted(a: Float64Array, s: number): Float64Array {
  const solver = denseSolver(fullPattern(s));
  solver.factor(a);
  const inverse = new Float64Array(s * s);
  const column = new Float64Array(s);
  for (let j = 0; j < s; j++) {
    column.fill(0);
    column[j] = 1;
    solver.solve(column);
    for (let i = 0; i < s; i++) inverse[i * s + j] = column[i];
  }
  return inverse;
}
