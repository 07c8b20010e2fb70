import { links, whiten } from "../numerics/autoregression.js";
import { chainOf } from "./autocorrelation.js";
import type { Block } from "./observations.js";

/** Best linear terms of one reading beside a given curve, SI. Drift is per second, counted from the block's origin. */
export interface LinearTerms {
  readonly scale: number;
  readonly offset: number;
  readonly drift: number;
}

/**
 * Takes the linear terms of one reading out of the problem (variable projection, Golub & Pereyra, SIAM J. Numer. Anal.
 * 10 (1973) 413-432): the residual left after the best offset, drift and scale for a given curve. The basis is made
 * orthonormal once by Gram-Schmidt run twice (Giraud, Langou & Rozloznik, Comput. Math. Appl. 50 (2005) 1069-1075).
 */
export interface Projector {
  /** Number of linear terms. */
  readonly terms: number;
  /**
   * Writes weighted residuals (measured - fitted) of `model` (SI) to `out` from the block's place on. Both are looked at again
   * when the baseline is asked for.
   */
  project(model: Float64Array, out: Float64Array): LinearTerms;
  /**
   * Derivatives of the residuals of `project` by what moves `model`.
   * @param slopes  how `model` moves by coordinate, SI; undefined where it does not
   * @param out     flat, a row of derivatives for each residual of the whole list; the block's rows are written
   */
  slopes(model: Float64Array, slopes: readonly (Float64Array | undefined)[], out: Float64Array): void;
  /** Columns of the weighted linear terms beside `model`: scale, offset, drift as far as free; SI per second for drift. */
  columns(model: Float64Array): Float64Array[];
  /** Takes the block's rows of a weighted list apart in place, where its errors hang together by declaration. */
  apart(all: Float64Array): void;
}

/** @param weight  of each observation of the whole list, 1/SI; those of the block are read and kept by reference */
export function projectorFor(block: Block, weight: Float64Array): Projector {
  const { time, measured, from, origin, span, declared } = block;
  const n = time.length;
  const free = declared.scale === "free";
  const chain = block.hangsTogether ? chainOf(block) : undefined;
  const rows = chain && Array.from(chain.rows, (i) => i - from);
  const phi = chain && links(chain, block.hangsTogether ?? 0);
  /** Errors that hang together by declaration are taken apart: generalised least squares. */
  const apart = (values: Float64Array): Float64Array => {
    if (rows && phi) whiten(rows, phi, values);
    return values;
  };
  const weigh = (values: Float64Array, into = new Float64Array(n)): Float64Array => {
    if (block.condensed) block.condensed.weigh(values, into);
    else for (let i = 0; i < n; i++) into[i] = weight[from + i] * values[i];
    return apart(into);
  };
  const fixed: Float64Array[] = [];
  if (declared.baseline !== "none") fixed.push(weigh(new Float64Array(n).fill(1)));
  if (declared.baseline === "drift") fixed.push(weigh(time.map((t) => (t - origin) / span)));
  const basis = orthonormal(fixed);
  const target = block.condensed ? block.condensed.target : weigh(measured);
  const targetLeft = Float64Array.from(target);
  removeTwice(targetLeft, basis);
  const curve = new Float64Array(n);

  const project = (model: Float64Array, out: Float64Array): LinearTerms => {
    let scale = 1;
    weigh(model, curve);
    removeTwice(curve, basis);
    if (free) {
      const norm = dot(curve, curve);
      scale = norm > 0 ? dot(curve, targetLeft) / norm : 0;
    }
    for (let i = 0; i < n; i++) out[from + i] = targetLeft[i] - scale * curve[i];
    let baseline: { offset: number; drift: number } | undefined;
    const found = (): { offset: number; drift: number } => {
      baseline ??= baselineOf(model, scale, out);
      return baseline;
    };
    // Most points of a search are never asked for theirs.
    return {
      scale,
      get offset() {
        return found().offset;
      },
      get drift() {
        return found().drift;
      },
    };
  };

  // Offset and drift follow from what the residual leaves of the data: fixed . coefficients = target - scale curve - residual.
  const baselineOf = (model: Float64Array, scale: number, out: Float64Array): { offset: number; drift: number } => {
    if (fixed.length === 0) return { offset: 0, drift: 0 };
    weigh(model, curve);
    for (let i = 0; i < n; i++) curve[i] = target[i] - scale * curve[i] - out[from + i];
    const second = basis.length > 1 ? dot(basis[1], curve) / dot(basis[1], fixed[1]) : 0;
    const first =
      (dot(basis[0], curve) - (second === 0 ? 0 : second * dot(basis[0], fixed[1]))) / dot(basis[0], fixed[0]);
    return { offset: first, drift: second / span };
  };

  const columns = (model: Float64Array): Float64Array[] => {
    const list = fixed.map((c, k) => (k === 1 ? c.map((x) => x * span) : c));
    return free ? [weigh(model), ...list] : list;
  };
  const moved = new Float64Array(n);
  const slopes = (model: Float64Array, of: readonly (Float64Array | undefined)[], out: Float64Array): void => {
    let scale = 1;
    let norm = 0;
    if (free) {
      weigh(model, curve);
      removeTwice(curve, basis);
      norm = dot(curve, curve);
      scale = norm > 0 ? dot(curve, targetLeft) / norm : 0;
    }
    for (let j = 0; j < of.length; j++) {
      const slope = of[j];
      if (!slope) continue;
      weigh(slope, moved);
      removeTwice(moved, basis);
      // d(y - s c) = -s dc - ds c, s = c.y / c.c
      const grows = norm > 0 ? (dot(moved, targetLeft) - 2 * scale * dot(curve, moved)) / norm : 0;
      for (let i = 0; i < n; i++) out[(from + i) * of.length + j] = -scale * moved[i] - (free ? grows * curve[i] : 0);
    }
  };
  const apartOfAll = (all: Float64Array): void => {
    if (chain && phi) whiten(chain.rows, phi, all);
  };
  return { terms: fixed.length + (free ? 1 : 0), project, slopes, columns, apart: apartOfAll };
}

function dot(a: Float64Array, b: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < a.length; i++) sum += a[i] * b[i];
  return sum;
}

/** v less its parts along the basis; once more where little was left, so that it is orthogonal to rounding. */
function removeTwice(v: Float64Array, basis: readonly Float64Array[]): void {
  for (let pass = 0; pass < 2 && basis.length > 0; pass++) {
    const before = pass === 0 ? dot(v, v) : 0;
    let taken = 0;
    for (const q of basis) {
      const share = dot(q, v);
      taken += share * share;
      for (let i = 0; i < v.length; i++) v[i] -= share * q[i];
    }
    if (taken < 0.9 * before) return;
  }
}

/** Leaves out a column that the earlier ones already span (a single point, equal times). */
function orthonormal(columns: readonly Float64Array[]): Float64Array[] {
  const basis: Float64Array[] = [];
  for (const c of columns) {
    const q = Float64Array.from(c);
    removeTwice(q, basis);
    const norm = Math.sqrt(dot(q, q));
    if (norm > 1e-12 * Math.sqrt(dot(c, c))) basis.push(q.map((x) => x / norm));
  }
  return basis;
}
