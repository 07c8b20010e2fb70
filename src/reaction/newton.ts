import { type BlockMatrix, block, blockMatrix, clear, solveBlocks } from "./block-matrix.js";

/** A square system F(y) = 0 in blocks, y >= 0. */
export interface System {
  /** Components of y in all, and of a block. */
  readonly length: number;
  readonly size: number;
  /** Time constant of each block, s: what pseudo-time slows down; 0 where the equation has no memory. */
  readonly memory: Float64Array;
  /** The least part of a component that a step leaves of it. */
  readonly fall: number;
  /** Writes F(y); false where it cannot be evaluated. */
  residual(y: Float64Array, f: Float64Array): boolean;
  /**
   * Writes -(dF/dy - memory rate)^-1 f, `rate` in 1/s, 0 for Newton; at least to the relative accuracy asked. False where
   * that cannot be had.
   */
  step(y: Float64Array, f: Float64Array, rate: number, relative: number, out: Float64Array): boolean;
  /** Makes a vector of `length`, where they have a place of their own. */
  readonly vector?: () => Float64Array;
  /** Told the norm of F before every step. */
  readonly watch?: ((norm: number) => void) | undefined;
}

/** The same by its Jacobian, for elimination. */
export interface BlockSystem extends Pick<System, "size" | "memory" | "residual"> {
  readonly count: number;
  /** Adds dF/dy into a matrix of zeros; false where it cannot be evaluated. */
  jacobian(y: Float64Array, m: BlockMatrix): boolean;
}

export interface NewtonResult {
  readonly converged: boolean;
  /** Largest |F| at the end. */
  readonly residual: number;
  /** Index into y of that largest one. */
  readonly worst: number;
  readonly iterations: number;
}

/** When a step no longer matters. */
interface Enough {
  readonly relative: number;
  readonly absolute: number;
  /** What equations miss, beside their component, where rounding alone may leave it: no step is then of use. */
  readonly balanced: number;
}

const rounding = 1e-10;
/** What a step near the end may leave of a component that stays positive: steep kinetics leave many decades less than enters. */
const atTheEnd = 1e-30;
/** No step is asked for more accurately than this. */
const tightest = 1e-5;
const byElimination: Enough = { relative: 1e-11, absolute: 1e-16, balanced: 0 };
/** Newton's method squares what a step leaves: far more than what it did not solve for. */
const byIteration: Enough = { relative: 1e-6, absolute: 1e-17, balanced: 1e-14 };

/** Newton's method for a system with its Jacobian, by block elimination. */
export function solveNewton(system: BlockSystem, y: Float64Array): NewtonResult {
  return newton(eliminating(system), y, byElimination);
}

/** The same from one of many starts: given up where it does not get on. */
export const solveNewtonFrom = (system: BlockSystem, y: Float64Array, steps: number): NewtonResult => {
  const eliminated = eliminating(system);
  return iterate(eliminated, workspace(eliminated), y, steps, byElimination);
};

/** The same for one that solves for its steps itself, to an accuracy that tightens as the residual falls. */
export const solveInexactNewton = (system: System, y: Float64Array): NewtonResult => newton(system, y, byIteration);

function eliminating(system: BlockSystem): System {
  const { count, size: n, memory } = system;
  const m = blockMatrix(count, n);
  return {
    length: count * n,
    size: n,
    memory,
    fall: 0.1,
    residual: (y, f) => system.residual(y, f),
    step(y, f, rate, _relative, out) {
      clear(m);
      if (!system.jacobian(y, m)) return false;
      if (rate > 0) {
        for (let k = 0; k < count; k++) {
          const diagonal = block(m, k, k);
          for (let i = 0; i < n; i++) diagonal[i * n + i] -= memory[k] * rate;
        }
      }
      for (let i = 0; i < out.length; i++) out[i] = -f[i];
      return solveBlocks(m, out) && out.every(Number.isFinite);
    },
  };
}

/**
 * Newton's method with exact Jacobian, halved steps where the residual does not fall, and no component allowed to fall by
 * more than a factor of ten in a step, so that concentrations stay positive; pseudo-transient continuation where that stalls.
 * @param y start, overwritten by the best found
 * @see C.T. Kelley, D.E. Keyes, SIAM J. Numer. Anal. 35 (1998) 508-523 (pseudo-transient continuation)
 */
function newton(system: System, y: Float64Array, enough: Enough): NewtonResult {
  const work = workspace(system);
  const first = iterate(system, work, y, 60, enough);
  if (first.converged) return first;
  settle(system, work, y, 400);
  const second = iterate(system, work, y, 60, enough);
  if (second.converged) return { ...second, iterations: first.iterations + second.iterations };
  settle(system, work, y, 400, wrongWay);
  const third = iterate(system, work, y, 60, enough);
  return { ...third, iterations: first.iterations + second.iterations + third.iterations };
}

interface Workspace {
  readonly f: Float64Array;
  readonly step: Float64Array;
  readonly trial: Float64Array;
  readonly fTrial: Float64Array;
}

function workspace({ length, vector = () => new Float64Array(length) }: System): Workspace {
  return { f: vector(), step: vector(), trial: vector(), fTrial: vector() };
}

/** Damped Newton steps until the step no longer matters, or none helps. */
function iterate(system: System, w: Workspace, y: Float64Array, limit: number, enough: Enough): NewtonResult {
  let norm = system.residual(y, w.f) ? size(w.f) : Number.POSITIVE_INFINITY;
  let small = 0;
  let iterations = 0;
  let converged = norm === 0;
  let forcing = 0.03;
  while (!converged && iterations < limit && Number.isFinite(norm)) {
    iterations++;
    system.watch?.(norm);
    if (!system.step(y, w.f, 0, forcing, w.step)) break;
    const relative = relativeStep(w.step, y, enough);
    // Near the end rounding decides whether the residual still falls: full steps are then taken as they are.
    small = relative.largest <= rounding ? small + 1 : 0;
    const next = small > 0 ? take(system, w, y, 1, Number.POSITIVE_INFINITY, atTheEnd) : descend(system, w, y, norm);
    if (next === undefined) break;
    forcing = Math.max(tightest, Math.min(forcing, 0.5 * (next / norm) ** 2));
    norm = next;
    converged = relative.done || small >= 3 || isBalanced(w.f, y, enough);
  }
  return { converged, residual: norm, worst: largestAt(w.f), iterations };
}

/** Implicit Euler steps in pseudo-time, lengthened as the residual falls (switched evolution relaxation); shorter where one is refused. */
function settle(
  system: System,
  w: Workspace,
  y: Float64Array,
  limit: number,
  refused: (...of: [System, Workspace, Float64Array]) => boolean = () => false,
): void {
  if (!system.residual(y, w.f)) return;
  let norm = size(w.f);
  let least = system.memory.reduce((m, x) => (x > 0 ? Math.min(m, x) : m), Number.POSITIVE_INFINITY) / 10;
  if (!Number.isFinite(least)) return;
  let pace = least;
  for (let k = 0; k < limit && norm > 1e-12; k++) {
    system.watch?.(norm);
    if (!system.step(y, w.f, 1 / pace, 1e-3, w.step)) return;
    const next = refused(system, w, y) ? undefined : take(system, w, y, 1);
    if (next === undefined) {
      pace /= 4;
      least = Math.min(least, pace);
      if (!system.residual(y, w.f)) return;
      continue;
    }
    // On the way the residual may grow (a reaction that ignites): time must go on all the same.
    pace = Math.max(least, pace * Math.min(Math.max(norm / next, 0.2), 3));
    norm = next;
  }
}

/**
 * Does a step empty what is growing? An implicit step longer than the time in which something multiplies (cells that grow on what
 * feeds them) turns its growth into decay.
 */
function wrongWay(system: System, { f, step }: Workspace, y: Float64Array): boolean {
  for (let i = 0; i < y.length; i++) if (f[i] > 0 && y[i] + step[i] < system.fall * y[i]) return true;
  return false;
}

/** Halves the step until the residual falls; undefined where it never does. */
function descend(system: System, w: Workspace, y: Float64Array, norm: number): number | undefined {
  for (let share = 1; share > 1e-6; share /= 2) {
    const next = take(system, w, y, share, norm * (1 - 1e-4 * share));
    if (next !== undefined) return next;
  }
  return undefined;
}

/** Moves y by a share of the step, kept positive; undefined (and y as it was) where the new norm exceeds `below`. */
function take(
  system: System,
  w: Workspace,
  y: Float64Array,
  share: number,
  below = Number.POSITIVE_INFINITY,
  fall = system.fall,
): number | undefined {
  for (let i = 0; i < y.length; i++) {
    const next = y[i] + share * w.step[i];
    w.trial[i] = next > 0 ? Math.max(next, fall * y[i]) : system.fall * y[i];
  }
  const norm = system.residual(w.trial, w.fTrial) ? size(w.fTrial) : Number.NaN;
  if (!(norm <= below) || !Number.isFinite(norm)) return undefined;
  y.set(w.trial);
  w.f.set(w.fTrial);
  return norm;
}

function relativeStep(step: Float64Array, y: Float64Array, enough: Enough): { largest: number; done: boolean } {
  let largest = 0;
  let done = true;
  for (let i = 0; i < y.length; i++) {
    const d = Math.abs(step[i]);
    largest = Math.max(largest, d);
    if (d > enough.relative * Math.abs(y[i]) + enough.absolute) done = false;
  }
  return { largest, done };
}

function isBalanced(f: Float64Array, y: Float64Array, { balanced }: Enough): boolean {
  for (let i = 0; i < y.length; i++) if (!(Math.abs(f[i]) <= balanced * Math.abs(y[i]))) return false;
  return true;
}

function size(f: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < f.length; i++) sum += f[i] * f[i];
  return Math.sqrt(sum);
}

function largestAt(f: Float64Array): number {
  let at = 0;
  for (let i = 1; i < f.length; i++) if (!(Math.abs(f[i]) <= Math.abs(f[at]))) at = i;
  return at;
}
