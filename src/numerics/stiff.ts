import type { Halt, Stretch, StretchResult } from "./odex.js";
import { norm, radauStep } from "./radau.js";
import { radauCoefficients } from "./radau-coefficients.js";
import { firstStep, stepControl } from "./stiff-control.js";
import { jacobianOf, type StiffProblem } from "./stiff-jacobian.js";
import { shiftedSystems } from "./stiff-linear.js";
import { evaluate, stepPolynomial } from "./stiff-polynomial.js";

export interface StiffStretch extends Stretch {
  /** Length of the first step, if something is known of it. */
  readonly firstStep?: number;
  /** Steps that are made whatever the budget: what a Jacobian costs is then not laid on a first short one alone. */
  readonly leastSteps?: number;
  /** How long a step from t may be at most. */
  readonly longest?: (t: number) => number;
  /** Error, in units of the tolerance, of what hangs on a trial step from t, y with stages y + z: it counts beside the state's. */
  readonly judge?: (t: number, h: number, y: Float64Array, z: readonly Float64Array[]) => number;
  /** Sees every accepted step; true pauses the run at its end. Arrays are reused. */
  readonly accepted?: (t: number, h: number, y: Float64Array, z: readonly Float64Array[]) => boolean;
}

export interface StiffResult extends StretchResult {
  readonly jacobians: number;
  readonly factorizations: number;
  /** All it did, in evaluations of the right-hand side. */
  readonly work: number;
  /** Length of the step that would come next. */
  readonly nextStep: number;
}

/** With corrections shrinking faster than this, the Jacobian is still good. */
const goodContraction = 1e-3;
/** A step that could grow less than this is kept, and its factors with it. */
const smallGrowth = 1.2;

/** Stages by tolerance: what took least work on the problems of `test/numerics/stiff.test.ts`; seven feel rounding most. */
const stagesFor = (relative: number): 3 | 5 | 7 => (relative > 3e-5 ? 3 : relative > 3e-10 ? 5 : 7);

/** Carries `y` over one stretch, changed in place, and hands out the outputs reached; the array is reused. */
export type StiffIntegrator = (p: StiffStretch, y: Float64Array, output: (y: Float64Array) => void) => StiffResult;

/**
 * Radau IIA with error control, outputs from the collocation polynomial, and the Jacobian and its factors kept as long as they
 * serve. The embedded error of order s, and so that of the outputs, is held under the tolerance; the ends of steps, which are
 * of order 2s - 1, come out much better. Buffers are made once and serve every stretch.
 *
 * The right-hand side is never asked at the ends of a stretch but just inside, so that a jump at a stop stays outside.
 *
 * @param stages default: by the tolerance
 * @see   E. Hairer, G. Wanner, Solving Ordinary Differential Equations II, 2nd ed., Springer 1996, sec. IV.8
 */
export function radauIntegrator(given: StiffProblem, relative: number, stages = stagesFor(relative)): StiffIntegrator {
  const n = given.size;
  let inside = (t: number): number => t;
  const problem: StiffProblem = {
    ...given,
    rhs: (t, y, dy) => given.rhs(inside(t), y, dy),
    ...(given.jacobian && { jacobian: (t, y, j) => given.jacobian?.(inside(t), y, j) }),
  };
  const jacobian = jacobianOf(problem);
  const coefficients = radauCoefficients(stages);
  const systems = shiftedSystems(jacobian, coefficients.pairs.length);
  const method = radauStep(problem, coefficients, systems);
  const power = 1 / (stages + 1);
  const control = stepControl(power);
  const wanted = Math.max((10 * Number.EPSILON) / relative, Math.min(0.03, relative ** 0.25));
  const last = stepPolynomial(n, coefficients.c, method.z);
  const evaluation = 2 * jacobian.value.length + 10 * n;
  const [f, next, nextF, row, scale] = Array.from({ length: 5 }, () => new Float64Array(n));

  return (p, y, output) => {
    inside = insideOf(p.from, p.to);
    const direction = Math.sign(p.to - p.from);
    const counts = { steps: 0, rejected: 0, rhs: 0, jacobians: 0, factorizations: 0 };
    let iterations = 0;
    let t = p.from;
    let h = 0;
    let outputs = 0;
    const work = (): number =>
      counts.rhs + (counts.factorizations * systems.work.factor + iterations * systems.work.solve) / evaluation;
    const finish = (how: { halt: Halt } | { paused: true } | object = {}): StiffResult => ({
      t,
      ...how,
      ...counts,
      work: work(),
      nextStep: Math.abs(h),
    });

    problem.rhs(t, y, f);
    counts.rhs++;
    if (!allFinite(f)) return finish({ halt: "not-finite" });
    rescale(p, y);
    if (p.firstStep) h = direction * Math.min(p.firstStep, Math.abs(p.to - t));
    else {
      // Not even the trial may look further ahead than steps may.
      const most = Math.min(Math.abs(p.to - t), p.longest?.(t) ?? Number.POSITIVE_INFINITY);
      h = firstStep({ problem, t, to: t + direction * most, y, f, scale, power }, next, nextF);
      counts.rhs++;
    }
    control.begin();
    last.h = 0;
    let fresh = false; // the Jacobian belongs to this very state
    let stale = true; // and should
    let factoredFor = Number.NaN; // the step that the factors belong to
    let noise = 0;
    let gapSeen = false;
    let again = true; // the first step, or after a rejection
    const shorten = (part: number): void => {
      counts.rejected++;
      again = true;
      h *= part;
    };
    for (;;) {
      const longest = p.longest ? p.longest(t) : Number.POSITIVE_INFINITY;
      if (Math.abs(h) > longest) {
        const kept = Math.abs(factoredFor);
        h = kept <= longest && smallGrowth * kept > longest && !stale ? factoredFor : direction * longest;
      }
      const left = p.to - t;
      const ending = Math.abs(h) * 1.01 >= Math.abs(left);
      if (ending) h = left;
      if (Math.abs(h) <= 8 * Number.EPSILON * Math.max(Math.abs(t), 1e-290) && !ending)
        return finish({ halt: gapSeen ? "not-finite" : "step-too-small" });
      if (stale && !fresh) {
        jacobian.evaluate(t, y, f, scale, h);
        counts.jacobians++;
        counts.rhs += jacobian.cost;
        fresh = true;
        factoredFor = Number.NaN;
      }
      stale = false;
      if (factoredFor !== h) {
        counts.factorizations++;
        const factored = systems.factor(jacobian, coefficients.real, coefficients.pairs, h);
        factoredFor = factored ? h : Number.NaN;
        if (!factored) {
          if (!allFinite(jacobian.value)) gapSeen = true;
          shorten(0.5);
          continue;
        }
        noise = noiseOf(y);
      }
      const end = method.solve(t, h, y, scale, last, wanted, noise);
      counts.rhs += method.evaluations;
      iterations += method.iterations;
      if (end !== "converged") {
        if (end === "not-finite") gapSeen = true;
        stale = true;
        if (end === "not-finite") shorten(0.25);
        else if (fresh) shorten(end === "slow" ? method.cut : 0.5);
        continue;
      }
      const before = method.evaluations;
      const judged = p.judge?.(t, h, y, method.z) ?? 0;
      const error = Math.max(1e-10, method.error(t, h, y, f, scale, again), judged);
      counts.rhs += method.evaluations - before;
      const most = 2 * method.mostIterations;
      const effort = (1 + most) / (method.iterations + most);
      if (!(error < 1)) {
        stale = true;
        shorten(control.rejected(error, effort));
        continue;
      }
      const step = method.z[stages - 1];
      for (let i = 0; i < n; i++) next[i] = y[i] + step[i];
      problem.rhs(t + h, next, nextF);
      counts.rhs++;
      if (!allFinite(nextF)) {
        gapSeen = true;
        shorten(0.25);
        continue;
      }
      const grown = control.accepted(h, error, effort);
      last.take(t, h, y, method.z);
      const enough = p.accepted?.(t, h, y, method.z) ?? false;
      t = ending ? p.to : t + h;
      for (; outputs < p.outputs.length && (p.outputs[outputs] - t) * direction < 0; outputs++) {
        evaluate(last, p.outputs[outputs], row);
        output(row);
      }
      y.set(next);
      f.set(nextF);
      for (; outputs < p.outputs.length && (ending || p.outputs[outputs] === t); outputs++) output(y);
      counts.steps++;
      if (ending) return finish();
      if (enough) return finish({ paused: true });
      rescale(p, y);
      gapSeen = false;
      again = false;
      fresh = false;
      stale = method.contraction > goodContraction;
      if (stale || grown < 1 || grown > smallGrowth) h *= grown;
      if (counts.steps >= p.maxSteps) return finish({ halt: "too-many-steps" });
      if (p.budget !== undefined && work() >= p.budget && counts.steps >= (p.leastSteps ?? 1))
        return finish({ paused: true });
    }
  };

  function rescale(p: StiffStretch, y: Float64Array): void {
    for (let i = 0; i < n; i++)
      scale[i] = (typeof p.absolute === "number" ? p.absolute : p.absolute[i]) + p.relative * Math.abs(y[i]);
  }

  /** Rounding of the terms that the right-hand side adds up, as it shows in a correction: with h it may outgrow the tolerance. */
  function noiseOf(y: Float64Array): number {
    const { start, column } = jacobian.pattern;
    for (let i = 0; i < n; i++) {
      let sum = 0;
      for (let k = start[i]; k < start[i + 1]; k++) sum += Math.abs(jacobian.value[k] * y[column[k]]);
      row[i] = (i % 2 === 0 ? 2 : 1) * Number.EPSILON * sum; // uneven, so that it does not cancel
    }
    systems.real.solve(row);
    return Math.max(norm(row, scale), 10 * Number.EPSILON * norm(y, scale));
  }
}

/** Moves times at the ends of a stretch just inside. */
function insideOf(from: number, to: number): (t: number) => number {
  const span = to - from;
  const nudge = Math.max(Math.abs(from), Math.abs(to), Math.abs(span)) * 2 ** -52;
  const first = from + Math.sign(span) * nudge;
  const last = to - Math.sign(span) * nudge;
  const [low, high] = span > 0 ? [first, last] : [last, first];
  return (t) => Math.max(low, Math.min(t, high));
}

function allFinite(v: Float64Array): boolean {
  for (let i = 0; i < v.length; i++) if (!(Math.abs(v[i]) < Number.POSITIVE_INFINITY)) return false;
  return true;
}
