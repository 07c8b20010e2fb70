import { gradient, type LinearModel, promised } from "./linear-model.js";
import { svd } from "./svd.js";

export interface Box {
  readonly p: Float64Array;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
}

export interface TrustStep {
  readonly step: Float64Array;
  /** Levenberg-Marquardt parameter; 0 for a full Gauss-Newton step. */
  readonly damping: number;
  /** Fall of the sum of squares that the linear model promises. */
  readonly promised: number;
  /** |D step|. */
  readonly length: number;
}

/** The parameters that may move: not at a bound, or with the downhill direction leading away from it. */
export function movable(model: LinearModel, { p, lower, upper }: Box): number[] {
  const g = gradient(model);
  const free: number[] = [];
  for (let j = 0; j < model.n; j++) {
    if (lower[j] < upper[j] && !(p[j] <= lower[j] && g[j] >= 0) && !(p[j] >= upper[j] && g[j] <= 0)) free.push(j);
  }
  return free;
}

/**
 * The Levenberg-Marquardt step of length |D s| <= radius (to 10 %) inside the box. What a step would carry over a bound is set
 * on the bound and the rest solved again.
 * @see J.J. Moré, in: Numerical Analysis, Lecture Notes in Mathematics 630, Springer 1978, 105-116
 */
export function trustStep(model: LinearModel, box: Box, d: Float64Array, radius: number): TrustStep {
  const { n, r } = model;
  const step = new Float64Array(n);
  const c = model.c.slice();
  let free = movable(model, box);
  let damping = 0;
  while (free.length > 0) {
    const part = freeStep(n, r, c, free, d, radius);
    damping = Math.max(damping, part.damping);
    const stopped = free.filter((j, k) => outside(box, j, part.step[k]));
    if (stopped.length === 0) {
      free.forEach((j, k) => {
        step[j] = part.step[k];
      });
      break;
    }
    for (const j of stopped) {
      const k = free.indexOf(j);
      step[j] = (part.step[k] < 0 ? box.lower[j] : box.upper[j]) - box.p[j];
      for (let i = 0; i < n; i++) c[i] += r[i * n + j] * step[j];
    }
    free = free.filter((j) => !stopped.includes(j));
  }
  return { step, damping, promised: promised(model, step), length: scaledLength(step, d) };
}

export function scaledLength(s: Float64Array, d: Float64Array): number {
  let sum = 0;
  for (let j = 0; j < s.length; j++) sum += (d[j] * s[j]) ** 2;
  return Math.sqrt(sum);
}

const outside = ({ p, lower, upper }: Box, j: number, s: number): boolean => p[j] + s < lower[j] || p[j] + s > upper[j];

/** The step over the free columns alone, by the singular values of R D^-1: the damping then costs a sum per try. */
function freeStep(
  n: number,
  r: Float64Array,
  c: Float64Array,
  free: readonly number[],
  d: Float64Array,
  radius: number,
): { step: Float64Array; damping: number } {
  const k = free.length;
  const scaled = new Float64Array(n * k);
  for (let i = 0; i < n; i++) for (let j = 0; j < k; j++) scaled[i * k + j] = r[i * n + free[j]] / d[free[j]];
  const { u, singular, v } = svd(scaled, n, k);
  const beta = new Float64Array(k);
  for (let i = 0; i < n; i++) for (let j = 0; j < k; j++) beta[j] -= u[i * k + j] * c[i];
  const dust = singular[0] * 1e-15;
  const weight = (j: number, damping: number): number =>
    singular[j] > dust ? (beta[j] * singular[j]) / (singular[j] ** 2 + damping) : 0;
  const damping = dampingFor(beta, singular, dust, radius);
  const step = new Float64Array(k);
  for (let j = 0; j < k; j++) {
    const y = weight(j, damping);
    for (let i = 0; i < k; i++) step[i] += v[i * k + j] * y;
  }
  for (let i = 0; i < k; i++) step[i] /= d[free[i]];
  return { step, damping };
}

/** The smallest damping whose step is no longer than the radius (to 10 %), by Newton's method on 1/length (Hebden 1973). */
function dampingFor(beta: Float64Array, singular: Float64Array, dust: number, radius: number): number {
  let damping = 0;
  for (let round = 0; round < 60; round++) {
    let square = 0;
    let slope = 0;
    for (let j = 0; j < beta.length; j++) {
      if (!(singular[j] > dust)) continue;
      const q = singular[j] ** 2 + damping;
      const y = (beta[j] * singular[j]) / q;
      square += y * y;
      slope += (y * y) / q;
    }
    const length = Math.sqrt(square);
    if (length <= 1.1 * radius) break;
    damping += (square / slope) * (length / radius - 1);
  }
  return damping;
}
