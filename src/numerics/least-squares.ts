import { covarianceOf } from "./covariance.js";
import type { LeastSquaresOptions } from "./least-squares-options.js";
import type { Point } from "./least-squares-polish.js";
import { Search } from "./least-squares-search.js";

export type { LeastSquaresOptions } from "./least-squares-options.js";

export interface LeastSquaresFit {
  readonly parameters: Float64Array;
  /**
   * n x n, row-major, with the residual variance RSS / (m - free parameters). NaN for parameters on a bound and where nothing
   * is left to estimate the variance from; Infinity for the variance of parameters the residuals cannot tell apart.
   */
  readonly covariance: Float64Array;
  readonly standardErrors: Float64Array;
  readonly residualSumOfSquares: number;
  readonly residuals: Float64Array;
  /** m x n, row-major, at the parameters. */
  readonly jacobian: Float64Array;
  readonly converged: boolean;
  readonly stopped?: "evaluations" | "cancelled" | "no-progress" | "bad-start";
  readonly evaluations: number;
  /** The bound a parameter came to rest on. */
  readonly atBound: ("lower" | "upper" | undefined)[];
}

/**
 * Bounded nonlinear least squares: Levenberg-Marquardt in a scaled trust region, with bounds by an active set in each step.
 *
 * The search runs on forward differences (or the given Jacobian), then ends on central ones, with which the standard errors are
 * made. All linear algebra is QR and singular values, never normal equations. Failure is a value: the best point found is
 * returned with `converged: false` and the reason.
 *
 * @throws RangeError where start, bounds or scale differ in length or a lower bound lies above its upper one
 * @see J.J. Moré, in: Numerical Analysis, Lecture Notes in Mathematics 630, Springer 1978, 105-116
 */
export function leastSquares(o: LeastSquaresOptions): LeastSquaresFit {
  const search = new Search(o);
  const at = search.run();
  return at ? report(at, search, o.polish ?? true) : badStart(search);
}

function report(at: Point, search: Search, polish: boolean): LeastSquaresFit {
  const n = at.p.length;
  const m = at.residuals.length;
  const { stopped } = search;
  const atBound = Array.from(at.p, (x, j) =>
    x <= search.lower[j] ? "lower" : x >= search.upper[j] ? "upper" : undefined,
  );
  const free = atBound.flatMap((side, j) => (side === undefined ? [j] : []));
  const variance = m > free.length ? at.sum / (m - free.length) : Number.NaN;
  const known = polish && stopped !== "cancelled";
  const jacobian = known ? search.lastJacobian(at) : nothing(m * n);
  const covariance = known ? covarianceOf(jacobian, m, n, free, variance) : nothing(n * n);
  return {
    parameters: at.p,
    covariance,
    standardErrors: Float64Array.from({ length: n }, (_, j) => Math.sqrt(covariance[j * n + j])),
    residualSumOfSquares: at.sum,
    residuals: at.residuals,
    jacobian,
    converged: stopped === undefined,
    ...(stopped ? { stopped } : {}),
    evaluations: search.evaluations,
    atBound,
  };
}

function badStart(search: Search): LeastSquaresFit {
  const n = search.start.length;
  const { stopped } = search;
  return {
    parameters: search.start,
    covariance: nothing(n * n),
    standardErrors: nothing(n),
    residualSumOfSquares: Number.NaN,
    residuals: nothing(0),
    jacobian: nothing(0),
    converged: false,
    stopped: stopped === undefined || stopped === "no-progress" ? "bad-start" : stopped,
    evaluations: search.evaluations,
    atBound: new Array<undefined>(n).fill(undefined),
  };
}

const nothing = (length: number): Float64Array => new Float64Array(length).fill(Number.NaN);
