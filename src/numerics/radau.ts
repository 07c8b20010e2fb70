import { combine } from "./combine.js";
import type { RadauCoefficients } from "./radau-coefficients.js";
import type { StiffProblem } from "./stiff-jacobian.js";
import type { ShiftedSystems } from "./stiff-linear.js";
import { evaluate, type StepPolynomial } from "./stiff-polynomial.js";

/** How the iteration for the stages ended. */
export type NewtonEnd = "converged" | "slow" | "diverged" | "not-finite";

/** The stages of one trial step and what they tell. The caller decides about step size, Jacobian and acceptance. */
export interface RadauStep {
  readonly coefficients: RadauCoefficients;
  /** Iterations that are worth their cost. */
  readonly mostIterations: number;
  /** What each stage adds to the start; the last is the step itself. */
  readonly z: Float64Array[];
  /** Of the last `solve`: iterations, evaluations of the right-hand side, and how fast corrections shrank. */
  iterations: number;
  evaluations: number;
  contraction: number;
  /** After "slow": the part of the step with which it should converge in time. */
  cut: number;
  /**
   * Simplified Newton iteration for the stages; the systems must be factored for this h.
   * @param guess polynomial to start from, if its h is not 0
   * @param scale size of an error of 1, per state
   * @param wanted error of the iteration in that measure
   * @param noise what rounding in the right-hand side makes of a correction, in that measure: nothing below is asked
   */
  solve(
    t: number,
    h: number,
    y: Float64Array,
    scale: Float64Array,
    guess: StepPolynomial,
    wanted: number,
    noise: number,
  ): NewtonEnd;
  /**
   * Size of the local error in units of the scale, root mean square; Infinity where it is not finite.
   * @param f rhs at (t, y)
   * Never less than the error of interpolation, as far as that can be told: for very stiff parts of the state the embedded
   * estimate is next to zero however long the step.
   * @param again filters a second time, with one more evaluation: for the first step or after a rejection
   */
  error(t: number, h: number, y: Float64Array, f: Float64Array, scale: Float64Array, again: boolean): number;
}

/**
 * One step of the s-stage Radau IIA method, in the basis where stages fall apart into one real and some complex systems.
 * No allocation in `solve` and `error`.
 * @see E. Hairer, G. Wanner, Solving Ordinary Differential Equations II, 2nd ed., Springer 1996, sec. IV.8
 */
export function radauStep({ size: n, rhs }: StiffProblem, k: RadauCoefficients, systems: ShiftedSystems): RadauStep {
  const s = k.stages;
  const stages = (): Float64Array[] => Array.from({ length: s }, () => new Float64Array(n));
  const z = stages();
  const w = stages(); // T^-1 z
  const f = stages();
  const change = stages();
  const at = new Float64Array(n);
  const part = new Float64Array(n);
  const local = new Float64Array(n);
  const slope = new Float64Array(n);
  // Noise that differs from stage to stage grows by this in w.
  const noiseGain = Math.hypot(...k.tInverse) / Math.sqrt(s);
  const predicted = new Float64Array(n); // what the guess made of the last stage
  let predictedFrom = 0; // length of the step that it came from
  let confidence = 1; // theta / (1 - theta) of the step before

  const step: RadauStep = {
    coefficients: k,
    mostIterations: 7 + Math.max(0, (5 * (s - 3)) / 2),
    z,
    iterations: 0,
    evaluations: 0,
    contraction: 0,
    cut: 1,

    solve(t, h, y, scale, guess, wanted, noise) {
      step.iterations = 0;
      step.evaluations = 0;
      if (guess.h === 0) {
        for (let i = 0; i < s; i++) {
          z[i].fill(0);
          w[i].fill(0);
        }
      } else {
        for (let i = 0; i < s; i++) {
          const stage = z[i];
          evaluate(guess, t + k.c[i] * h, stage);
          for (let m = 0; m < n; m++) stage[m] -= y[m];
        }
        transform(k.tInverse, s, z, w);
        predicted.set(z[s - 1]);
      }
      predictedFrom = guess.h;
      confidence = Math.max(confidence, Number.EPSILON) ** 0.8;
      step.contraction = 0;
      let before = 0;
      let ratioBefore = 0;
      for (let iteration = 1; iteration <= step.mostIterations; iteration++) {
        step.iterations = iteration;
        for (let i = 0; i < s; i++) {
          const stage = z[i];
          for (let m = 0; m < n; m++) at[m] = y[m] + stage[m];
          rhs(t + k.c[i] * h, at, f[i]);
          step.evaluations++;
        }
        transform(k.tInverse, s, f, change);
        const real = k.real / h;
        const first = change[0];
        const firstW = w[0];
        for (let m = 0; m < n; m++) first[m] -= real * firstW[m];
        systems.real.solve(first);
        for (let p = 0; p < k.pairs.length; p++) {
          const re = k.pairs[p].re / h;
          const im = k.pairs[p].im / h;
          const [a, b] = [1 + 2 * p, 2 + 2 * p];
          const changeRe = change[a];
          const changeIm = change[b];
          const wRe = w[a];
          const wIm = w[b];
          for (let m = 0; m < n; m++) {
            changeRe[m] -= re * wRe[m] - im * wIm[m];
            changeIm[m] -= im * wRe[m] + re * wIm[m];
          }
          systems.complex[p].solve(changeRe, changeIm);
        }
        const size = sizeOf(change, scale);
        if (!(size < Number.POSITIVE_INFINITY)) return "not-finite";
        if (iteration > 1) {
          const ratio = size / before;
          const theta = iteration === 2 ? ratio : Math.sqrt(ratio * ratioBefore);
          ratioBefore = ratio;
          step.contraction = theta;
          const drowned = size < Math.min(1, noise * noiseGain);
          if (theta >= 0.99) return drowned ? "converged" : "diverged";
          confidence = theta / (1 - theta);
          const left = step.mostIterations - iteration;
          const expected = (confidence * size * theta ** left) / wanted;
          if (left > 0 && expected >= 1) {
            if (drowned) return "converged";
            step.cut = 0.8 * Math.max(1e-4, Math.min(20, expected)) ** (-1 / (4 + left));
            return "slow";
          }
        }
        before = Math.max(size, Number.MIN_VALUE);
        for (let i = 0; i < s; i++) {
          const known = w[i];
          const more = change[i];
          for (let m = 0; m < n; m++) known[m] += more[m];
        }
        transform(k.t, s, w, z);
        if (confidence * size <= wanted) return "converged";
      }
      return "diverged";
    },

    error(t, h, y, start, scale, again) {
      const between = interpolationError(h, scale);
      part.fill(0);
      combine(k.error, 0, z, part);
      for (let m = 0; m < n; m++) part[m] /= h;
      for (let m = 0; m < n; m++) local[m] = part[m] + start[m];
      systems.real.solve(local);
      const size = norm(local, scale);
      if (!(size < Number.POSITIVE_INFINITY)) return Number.POSITIVE_INFINITY;
      if (size < 1 || !again) return Math.max(size, between);
      for (let m = 0; m < n; m++) at[m] = y[m] + local[m];
      rhs(t, at, slope);
      step.evaluations++;
      for (let m = 0; m < n; m++) local[m] = part[m] + slope[m];
      systems.real.solve(local);
      const filtered = norm(local, scale);
      return Math.max(Number.isNaN(filtered) ? size : filtered, between);
    },
  };
  return step;

  /**
   * The smaller of two upper estimates: what the polynomial through the stages alone misses the start by, of order s; and
   * what the polynomial of the step before has missed this end by, scaled back into the step, of order s + 1 but easily
   * upset by what went on before.
   */
  function interpolationError(h: number, scale: Float64Array): number {
    local.fill(0);
    combine(k.miss, 0, z, local);
    const missed = k.missWithin * norm(local, scale);
    if (predictedFrom === 0 || missed < 1) return missed < 1 ? 0 : missed;
    const end = 1 + h / predictedFrom;
    let back = k.nodal / end;
    for (let j = 0; j < s; j++) back *= h / predictedFrom / (end - k.c[j]);
    back *= h / predictedFrom;
    const reached = z[s - 1];
    for (let m = 0; m < n; m++) local[m] = back * (reached[m] - predicted[m]);
    return Math.min(missed, norm(local, scale));
  }
}

/** to_i = sum over j of matrix[i, j] from_j. */
function transform(matrix: Float64Array, s: number, from: readonly Float64Array[], to: readonly Float64Array[]): void {
  for (let i = 0; i < s; i++) {
    to[i].fill(0);
    combine(matrix, i * s, from, to[i]);
  }
}

function sizeOf(stages: readonly Float64Array[], scale: Float64Array): number {
  let sum = 0;
  for (const stage of stages) for (let m = 0; m < stage.length; m++) sum += (stage[m] / scale[m]) ** 2;
  return Math.sqrt(sum / (stages.length * scale.length));
}

export function norm(v: Float64Array, scale: Float64Array): number {
  let sum = 0;
  for (let m = 0; m < v.length; m++) sum += (v[m] / scale[m]) ** 2;
  return Math.sqrt(sum / v.length);
}
