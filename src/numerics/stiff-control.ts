import { norm } from "./radau.js";
import type { StiffProblem } from "./stiff-jacobian.js";

/** Chooses step sizes from local errors, so that these stay just under 1. */
export interface StepControl {
  /**
   * Part by which to go on after a trial step.
   * @param error of the step, in units of the tolerance
   * @param effort iterations beyond which a step is too long to iterate well, over those allowed: cuts growth
   */
  accepted(h: number, error: number, effort: number): number;
  rejected(error: number, effort: number): number;
  /** Forgets the steps before. */
  begin(): void;
}

const safety = 0.9;
/** Largest growth and cut in one step. */
const growth = 8;
const shrink = 1 / 5;

/**
 * For a method whose error estimate has order h^(1/power). Predicts from the last two errors, so that a step that will be too
 * long is seen coming.
 * @see K. Gustafsson, ACM Trans. Math. Softw. 20 (1994) 496-517
 */
export function stepControl(power: number): StepControl {
  let lastH = 0;
  let lastError = 1;
  let rejectedBefore = false;
  const part = (error: number, effort: number): number =>
    Math.max(shrink, Math.min(growth, (safety * effort) / error ** power));
  return {
    begin() {
      lastH = 0;
      rejectedBefore = false;
    },
    accepted(h, error, effort) {
      let next = part(error, effort);
      if (lastH !== 0) {
        const predicted = safety * (h / lastH) * (lastError / (error * error)) ** power;
        next = Math.min(next, Math.max(shrink, Math.min(growth, predicted)));
      }
      if (rejectedBefore) next = Math.min(next, 1);
      rejectedBefore = false;
      lastH = h;
      lastError = Math.max(0.01, error);
      return next;
    },
    rejected(error, effort) {
      rejectedBefore = true;
      return lastH === 0 ? Math.min(0.1, part(error, effort)) : part(error, effort);
    },
  };
}

/** Where an integration starts. */
export interface Start {
  readonly problem: StiffProblem;
  readonly t: number;
  readonly to: number;
  readonly y: Float64Array;
  /** rhs at (t, y). */
  readonly f: Float64Array;
  readonly scale: Float64Array;
  /** 1 / order of the error in h. */
  readonly power: number;
}

/**
 * First step, signed, by the size of the first two derivatives in units of the tolerance; one evaluation.
 * @param there and slope buffers
 * @see E. Hairer, S.P. Nørsett, G. Wanner, Solving Ordinary Differential Equations I, 2nd ed., Springer 1993, sec. II.4
 */
export function firstStep(s: Start, there: Float64Array, slope: Float64Array): number {
  const { y, f, scale } = s;
  const direction = Math.sign(s.to - s.t);
  const most = Math.abs(s.to - s.t);
  const d0 = norm(y, scale);
  const d1 = norm(f, scale);
  const probe = Math.min(most, d0 < 1e-5 || d1 < 1e-5 ? 1e-6 * most : (0.01 * d0) / d1);
  for (let i = 0; i < y.length; i++) there[i] = y[i] + direction * probe * f[i];
  s.problem.rhs(s.t + direction * probe, there, slope);
  for (let i = 0; i < y.length; i++) slope[i] -= f[i];
  const largest = Math.max(d1, norm(slope, scale) / probe);
  const usual = largest <= 1e-15 ? 1e-3 * most : (0.01 / largest) ** s.power;
  const length = Math.min(100 * probe, usual, most);
  return direction * (length > 0 ? length : Math.min(probe, 1e-6 * most));
}
