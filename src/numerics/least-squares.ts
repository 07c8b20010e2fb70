import { covarianceOf } from "./covariance.js";
import { type Boxed, centralJacobian, forwardJacobian } from "./numeric-jacobian.js";
import { applyTransposedQ, entryOfR, factorQr } from "./qr.js";
import { gradient, type LinearModel, movable, scaledLength, trustStep } from "./trust-step.js";

export interface LeastSquaresOptions {
  /** Residuals at p, always the same number of them. Non-finite ones mean that p is no good: the step is rejected. */
  readonly residuals: (p: Float64Array) => ArrayLike<number>;
  /** d residual i / d parameter j: flat row-major m x n, or one row per residual. Without it differences are taken. */
  readonly jacobian?: (p: Float64Array) => ArrayLike<number> | ArrayLike<ArrayLike<number>>;
  readonly start: ArrayLike<number>;
  /** Bounds, infinite where left out. A start outside is moved onto them. */
  readonly lower?: ArrayLike<number>;
  readonly upper?: ArrayLike<number>;
  /** Typical size of each parameter: sets the difference steps near 0. Default: |start|, or 1 where that is 0. */
  readonly scale?: ArrayLike<number>;
  /** False where the parameters make no sense together: a step that leads there is cut back. */
  readonly allowed?: (p: Float64Array) => boolean;
  /** Relative fall of the sum of squares, and relative step, under which the search ends. Default 1e-10. */
  readonly tolerance?: number;
  /** Calls of `residuals`, those for differences included. Default 1000 (n + 1). */
  readonly maxEvaluations?: number;
  readonly cancelled?: () => boolean;
  readonly progress?: (at: {
    readonly evaluations: number;
    readonly residualSumOfSquares: number;
    readonly parameters: Float64Array;
  }) => void;
}

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

/** A point of the search. */
interface Point {
  p: Float64Array;
  residuals: Float64Array;
  sum: number;
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
  return search.run();
}

class Search {
  private readonly n: number;
  private readonly lower: Float64Array;
  private readonly upper: Float64Array;
  private readonly boxed: Boxed;
  private readonly maxEvaluations: number;
  private readonly tolerance: number;
  private evaluations = 0;
  private halted: "evaluations" | "cancelled" | undefined;

  constructor(private readonly o: LeastSquaresOptions) {
    const n = o.start.length;
    this.n = n;
    this.lower = vector(o.lower, n, "lower", () => Number.NEGATIVE_INFINITY);
    this.upper = vector(o.upper, n, "upper", () => Number.POSITIVE_INFINITY);
    for (let j = 0; j < n; j++) {
      if (!(this.lower[j] <= this.upper[j])) throw new RangeError(`lower[${j}] lies above upper[${j}]`);
    }
    const typical = vector(o.scale, n, "scale", (j) => Math.abs(o.start[j])).map((s) => Math.abs(s) || 1);
    this.boxed = { evaluate: (p) => this.evaluate(p), lower: this.lower, upper: this.upper, typical };
    this.maxEvaluations = o.maxEvaluations ?? 1000 * (n + 1);
    this.tolerance = o.tolerance ?? 1e-10;
  }

  run(): LeastSquaresFit {
    const p = Float64Array.from(this.o.start, (x, j) => Math.min(Math.max(x, this.lower[j]), this.upper[j]));
    const start = this.point(p);
    if (!start) return this.badStart(p);
    let best = start;
    let why = "no-progress" as "converged" | "no-progress";
    for (const accurate of this.o.jacobian ? [true] : [false, true]) {
      [best, why] = this.descend(best, accurate);
      if (this.halted) break;
    }
    if (!this.halted) best = this.polish(best);
    return this.report(best, why);
  }

  /** Trust-region descent until a test of convergence holds or no step helps. */
  private descend(from: Point, accurate: boolean): [Point, "converged" | "no-progress"] {
    const { n, tolerance } = this;
    let at = from;
    const d = new Float64Array(n);
    let radius = 0;
    for (let iteration = 0; ; iteration++) {
      const jacobian = this.jacobian(at, accurate);
      if (this.halted) return [at, "no-progress"];
      this.o.progress?.({
        evaluations: this.evaluations,
        residualSumOfSquares: at.sum,
        parameters: at.p.slice(),
      });
      const model = compress(jacobian, at.residuals, n);
      for (let j = 0; j < n; j++) d[j] = Math.max(d[j], columnNorm(model, j));
      const scale = d.map((x) => x || 1);
      const size = scaledLength(at.p, scale);
      if (iteration === 0) radius = size || 1;
      const box = { p: at.p, lower: this.lower, upper: this.upper };
      if (slope(model, movable(model, box), at.sum) <= 1e-15) return [at, "converged"];
      for (;;) {
        const { step, promised, length, damping } = trustStep(model, box, scale, radius);
        if (length === 0 || !(promised > 0)) return [at, "converged"];
        const next = this.tryStep(at.p, step);
        if (this.halted) return [at, "no-progress"];
        const gain = next ? at.sum - next.sum : Number.NEGATIVE_INFINITY;
        const ratio = gain / promised;
        if (ratio < 0.25)
          radius = Math.min(radius, length) * (gain > Number.NEGATIVE_INFINITY && ratio > -1 ? 0.5 : 0.1);
        else if (ratio > 0.75 || damping === 0) radius = Math.max(radius, 2 * length);
        const accepted = next !== undefined && ratio > 1e-4;
        if (accepted) at = next;
        const still = promised <= tolerance * at.sum && Math.abs(gain) <= tolerance * at.sum && ratio <= 2;
        if (still || (accepted && length <= tolerance * size)) return [at, "converged"];
        if (radius <= 1e-15 * size || radius < 1e-280) {
          return [at, slope(model, movable(model, box), at.sum) < 1e-5 ? "converged" : "no-progress"];
        }
        if (accepted) break;
      }
    }
  }

  /**
   * Gauss-Newton steps on the accurate Jacobian for as long as they get shorter: near the optimum the sum of squares is flat to
   * rounding long before the parameters are.
   */
  private polish(from: Point): Point {
    let at = from;
    let before = Number.POSITIVE_INFINITY;
    for (let round = 0; round < 12; round++) {
      const model = compress(this.jacobian(at, true), at.residuals, this.n);
      const scale = Float64Array.from({ length: this.n }, (_, j) => columnNorm(model, j) || 1);
      const box = { p: at.p, lower: this.lower, upper: this.upper };
      const { step, length } = trustStep(model, box, scale, Number.POSITIVE_INFINITY);
      if (this.halted || !(length < before / 2) || length > 1e-3 * scaledLength(at.p, scale)) return at;
      const next = this.tryStep(at.p, step);
      if (!next || this.halted || next.sum > at.sum * (1 + 1e-12)) return at;
      at = next;
      before = length;
    }
    return at;
  }

  /** The point a step away; a step that leaves what is allowed is cut back to where it does. */
  private tryStep(p: Float64Array, step: Float64Array): Point | undefined {
    const { allowed } = this.o;
    const reach = (fraction: number): Float64Array =>
      p.map((x, j) => Math.min(Math.max(x + fraction * step[j], this.lower[j]), this.upper[j]));
    const whole = reach(1);
    if (!allowed || allowed(whole)) return this.point(whole);
    let inside = 0;
    for (let outside = 1, round = 0; round < 12 || (inside === 0 && round < 40); round++) {
      const middle = (inside + outside) / 2;
      if (allowed(reach(middle))) inside = middle;
      else outside = middle;
    }
    return inside > 0 ? this.point(reach(inside)) : undefined;
  }

  private point(p: Float64Array): Point | undefined {
    const values = this.evaluate(p);
    if (!values) return undefined;
    const residuals = Float64Array.from(values);
    return { p, residuals, sum: sumOfSquares(residuals) };
  }

  private evaluate(p: Float64Array): ArrayLike<number> | undefined {
    if (this.o.cancelled?.()) this.halted ??= "cancelled";
    if (this.evaluations >= this.maxEvaluations) this.halted ??= "evaluations";
    if (this.halted || this.o.allowed?.(p) === false) return undefined;
    this.evaluations++;
    const values = this.o.residuals(p);
    return Number.isFinite(sumOfSquares(values)) ? values : undefined;
  }

  private jacobian(at: Point, accurate: boolean): Float64Array {
    const given = this.o.jacobian?.(at.p);
    if (given) return flat(given, at.residuals.length, this.n);
    return accurate ? centralJacobian(this.boxed, at.p, at.residuals) : forwardJacobian(this.boxed, at.p, at.residuals);
  }

  private report(at: Point, why: "converged" | "no-progress"): LeastSquaresFit {
    const { n, halted } = this;
    const m = at.residuals.length;
    const spent = this.evaluations;
    this.halted = undefined; // a run cut short still gets its standard errors, unless cancelled
    const grace = { ...this.boxed, evaluate: (p: Float64Array) => this.o.residuals(p) };
    const jacobian =
      halted === "cancelled"
        ? new Float64Array(m * n).fill(Number.NaN)
        : this.o.jacobian
          ? this.jacobian(at, true)
          : centralJacobian(grace, at.p, at.residuals);
    const atBound = Array.from(at.p, (x, j) =>
      x <= this.lower[j] ? "lower" : x >= this.upper[j] ? "upper" : undefined,
    );
    const free = atBound.flatMap((side, j) => (side === undefined ? [j] : []));
    const variance = m > free.length ? at.sum / (m - free.length) : Number.NaN;
    const covariance = covarianceOf(jacobian, m, n, free, variance);
    const stopped = halted ?? (why === "converged" ? undefined : why);
    return {
      parameters: at.p,
      covariance,
      standardErrors: Float64Array.from({ length: n }, (_, j) => Math.sqrt(covariance[j * n + j])),
      residualSumOfSquares: at.sum,
      residuals: at.residuals,
      jacobian,
      converged: stopped === undefined,
      ...(stopped ? { stopped } : {}),
      evaluations: spent,
      atBound,
    };
  }

  private badStart(p: Float64Array): LeastSquaresFit {
    const { n } = this;
    return {
      parameters: p,
      covariance: new Float64Array(n * n).fill(Number.NaN),
      standardErrors: new Float64Array(n).fill(Number.NaN),
      residualSumOfSquares: Number.NaN,
      residuals: new Float64Array(0),
      jacobian: new Float64Array(0),
      converged: false,
      stopped: this.halted ?? "bad-start",
      evaluations: this.evaluations,
      atBound: new Array<undefined>(n).fill(undefined),
    };
  }
}

/** R and Q' residuals of the Jacobian, R in the order of its columns. */
function compress(jacobian: Float64Array, residuals: Float64Array, n: number): LinearModel {
  const m = residuals.length;
  const qr = factorQr(jacobian, m, n);
  const rotated = residuals.slice();
  applyTransposedQ(qr, rotated);
  const r = new Float64Array(n * n);
  const c = new Float64Array(n);
  for (let i = 0; i < Math.min(m, n); i++) {
    c[i] = rotated[i];
    for (let j = i; j < n; j++) r[i * n + qr.columns[j]] = entryOfR(qr, i, j);
  }
  return { n, r, c };
}

/** Largest cosine between the residuals and a column that may move: 0 at an optimum. */
function slope(model: LinearModel, free: readonly number[], sum: number): number {
  const g = gradient(model);
  let largest = 0;
  for (const j of free) {
    const norm = columnNorm(model, j);
    if (norm > 0 && sum > 0) largest = Math.max(largest, Math.abs(g[j]) / norm / Math.sqrt(sum));
  }
  return largest;
}

function columnNorm({ n, r }: LinearModel, j: number): number {
  let sum = 0;
  for (let i = 0; i < n; i++) sum += r[i * n + j] ** 2;
  return Math.sqrt(sum);
}

function sumOfSquares(x: ArrayLike<number>): number {
  let sum = 0;
  for (let i = 0; i < x.length; i++) sum += x[i] * x[i];
  return sum;
}

function vector(
  given: ArrayLike<number> | undefined,
  n: number,
  name: string,
  or: (j: number) => number,
): Float64Array {
  if (given && given.length !== n) throw new RangeError(`${name} has ${given.length} entries, start has ${n}`);
  return Float64Array.from({ length: n }, (_, j) => (given ? given[j] : or(j)));
}

function flat(rows: ArrayLike<number> | ArrayLike<ArrayLike<number>>, m: number, n: number): Float64Array {
  if (m === 0 || typeof rows[0] === "number") return Float64Array.from(rows as ArrayLike<number>);
  const jacobian = new Float64Array(m * n);
  for (let i = 0; i < m; i++) jacobian.set(rows[i] as ArrayLike<number>, i * n);
  return jacobian;
}
