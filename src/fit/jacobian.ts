import { orthonormalBasis } from "./basis.js";
import type { Direction } from "./forward.js";
import type { Held } from "./held.js";
import type { Evaluation, Problem } from "./problem.js";
import { curvesAt, type Setup, slopesOf } from "./setup.js";

/**
 * Step of a central difference, where one must serve: for trials that start with tracer inside or whose tracer does not follow
 * the liquid (losses and retention in vessels that can be recorded aside), for closed vessels, at a bound where a volume or flow begins to be there, and where undispersed parts of one delay
 * part. Curves are exact to about 1e-13 of their peak (laplace: 1e-10), so that 1e-5 leaves errors near 1e-8.
 */
const step = 1e-5;

/**
 * Jacobian of the residuals of a problem, linear terms taken out: exact, the derivative of the projection included.
 * @returns flat, row by row
 * @see Golub & Pereyra, SIAM J. Numer. Anal. 10 (1973) 413-432
 */
export function projectedJacobian(problem: Problem, x: Float64Array, at: Evaluation): Float64Array {
  const { setup, projectors, priors } = problem;
  const n = x.length;
  const jacobian = new Float64Array(at.residuals.length * n);
  const slopes = allCurveSlopes(problem, x, at);
  for (const [b, projector] of projectors.entries())
    projector.slopes(
      at.curves[b],
      slopes.map((s) => s?.[b]),
      jacobian,
    );
  for (const [p, prior] of priors.entries()) {
    jacobian[(setup.observations + p) * n + prior.index] = prior.slope(x[prior.index]);
  }
  return jacobian;
}

/**
 * The full Jacobian of the weighted fitted curve at a point, by columns: first the coordinates of `x` with the linear terms
 * held, then the linear terms. Rows: observations, then priors.
 * @returns columns, each as long as the residuals; the problem keeps them, so that asking twice costs once
 */
export function fullJacobian(problem: Problem, x: Float64Array, at: Evaluation): readonly Float64Array[] {
  const { setup, projectors, priors, last } = problem;
  if (last.at === at && last.columns) return last.columns;
  const rows = at.residuals.length;
  const columns: Float64Array[] = [];
  const slopes = allCurveSlopes(problem, x, at);
  for (let j = 0; j < x.length; j++) {
    const c = new Float64Array(rows);
    const moved = slopes[j];
    if (moved) weighCurves(problem, moved, at, c);
    for (const [p, prior] of priors.entries()) {
      if (prior.index === j) c[setup.observations + p] = -prior.slope(x[j]);
    }
    columns.push(c);
  }
  for (const [b, projector] of projectors.entries()) {
    const own = projector.columns(at.curves[b]);
    // Of the only reading a column is the whole.
    if (projectors.length === 1 && priors.length === 0) columns.push(...own);
    else
      for (const part of own) {
        const c = new Float64Array(rows);
        c.set(part, setup.blocks[b].from);
        columns.push(c);
      }
  }
  last.at = at;
  last.columns = columns;
  last.basis = undefined;
  return columns;
}

/** Orthonormal columns that span those of the full Jacobian at a point. */
export function fullBasis(problem: Problem, x: Float64Array, at: Evaluation): readonly Float64Array[] {
  const columns = fullJacobian(problem, x, at);
  problem.last.basis ??= orthonormalBasis(columns);
  return problem.last.basis;
}

/**
 * Weighted change of the fitted curve per standard deviation of an uncertain constant, linear terms held.
 * @returns undefined where it cannot be moved
 */
export function constantSlope(
  problem: Problem,
  x: Float64Array,
  at: Evaluation,
  constant: Held,
): Float64Array | undefined {
  const { setup } = problem;
  const curves = (by: number): Float64Array[] | undefined =>
    curvesAt(setup, x, (facts) => constant.move(facts, by * constant.sd));
  const [exact] = slopesOf(setup, at.facts, [(t) => scaled(constant.direction(t), constant.sd)]);
  const slopes = exact ?? difference(curves, 1e-3, at.curves, true, true);
  if (!slopes) return undefined;
  const c = new Float64Array(at.residuals.length);
  weighCurves(problem, slopes, at, c);
  return c;
}

function weighCurves(
  { setup, weight, projectors }: Problem,
  slopes: readonly Float64Array[],
  at: Evaluation,
  into: Float64Array,
): void {
  for (const [b, block] of setup.blocks.entries()) {
    const { scale } = at.terms[b];
    const own = into.subarray(block.from, block.from + block.time.length);
    if (block.condensed) block.condensed.weigh(slopes[b], own);
    else for (let i = 0; i < own.length; i++) own[i] = weight[block.from + i] * slopes[b][i];
    for (let i = 0; i < own.length; i++) own[i] *= scale;
    projectors[b].apart(into);
  }
}

/** d curves / d x[j], SI per unit of the coordinate: exact where the model is, by differences where it is not. */
export function allCurveSlopes(
  { setup, known }: Problem,
  x: Float64Array,
  at: Evaluation,
): readonly (readonly Float64Array[] | undefined)[] {
  if (known?.curves === at.curves) return known.slopes;
  const directions = Array.from(x, (u, j) => {
    const c = setup.coordinates[j];
    if (!c) {
      const held = setup.held[j - setup.coordinates.length];
      return (t: number): Direction | undefined => scaled(held.direction(t), held.sd);
    }
    const direction = { names: new Map([[c.named.name, c.slope(u)]]) };
    return (trial: number): Direction | undefined =>
      c.trial === undefined || c.trial === trial ? direction : undefined;
  });
  return slopesOf(setup, at.facts, directions).map((s, j) => s ?? curveDifferences(setup, x, j, at.curves));
}

/** The same direction, `by` times as far. */
function scaled(direction: Direction | undefined, by: number): Direction | undefined {
  if (!direction) return undefined;
  const all = (m: ReadonlyMap<string, number>): Map<string, number> => new Map([...m].map(([k, v]) => [k, by * v]));
  const { names, day, dose, line, changed } = direction;
  return {
    names: all(names),
    ...(day ? { day: all(day) } : {}),
    ...(dose ? { dose: { ...dose, slope: by * dose.slope } } : {}),
    ...(line ? { line: { ...line, delay: by * line.delay, lag: by * line.lag } } : {}),
    ...(changed ? { changed: (trial, t) => changed(trial, by * t) } : {}),
  };
}

function curveDifferences(
  setup: Setup,
  x: Float64Array,
  j: number,
  here: readonly Float64Array[],
): Float64Array[] | undefined {
  const coordinate = setup.coordinates[j];
  const h = coordinate ? step * Math.max(1, coordinate.from === 0 ? 1 : Math.abs(x[j])) : 1e-3;
  const curves = (by: number): Float64Array[] | undefined => {
    const moved = Float64Array.from(x);
    moved[j] += by;
    return curvesAt(setup, moved);
  };
  const up = !coordinate || x[j] + h <= coordinate.to;
  const down = !coordinate || x[j] - h >= coordinate.from;
  return difference(curves, h, here, up, down);
}

/** Central where both sides exist, else one-sided of second order. */
function difference(
  curves: (by: number) => Float64Array[] | undefined,
  h: number,
  here: readonly Float64Array[],
  up: boolean,
  down: boolean,
): Float64Array[] | undefined {
  const above = up ? curves(h) : undefined;
  const below = down ? curves(-h) : undefined;
  if (above && below) return above.map((a, b) => a.map((v, i) => (v - below[b][i]) / (2 * h)));
  const side = above ? 1 : -1;
  const near = above ?? below;
  const far = near && curves(2 * side * h);
  if (!near || !far) return undefined;
  return near.map((a, b) => a.map((v, i) => (side * (4 * v - 3 * here[b][i] - far[b][i])) / (2 * h)));
}
