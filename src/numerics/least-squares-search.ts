import type { LeastSquaresOptions } from "./least-squares-options.js";
import { type Point, polished } from "./least-squares-polish.js";
import { columnNorm, compress, promised as promisedFall, slope } from "./linear-model.js";
import { type Boxed, centralJacobian, forwardJacobian } from "./numeric-jacobian.js";
import { movable, scaledLength, trustStep } from "./trust-step.js";

/** One descent to a least sum of squares; `leastSquares` says how. */
export class Search {
  readonly start: Float64Array;
  readonly lower: Float64Array;
  readonly upper: Float64Array;
  evaluations = 0;
  private readonly n: number;
  private readonly boxed: Boxed;
  private readonly maxEvaluations: number;
  private readonly tolerance: number;
  /** Lengths of the columns of the last Jacobian. */
  private columnNorms = new Float64Array(0);
  private end: "converged" | "no-progress" = "no-progress";
  /** The last Jacobian: the end of one stage is the start of the next. */
  private kept: { at: Point; accurate: boolean; jacobian: Float64Array } | undefined;
  private halted: "evaluations" | "cancelled" | undefined;

  constructor(private readonly o: LeastSquaresOptions) {
    const n = o.start.length;
    this.n = n;
    this.lower = vector(o.lower, n, "lower", () => Number.NEGATIVE_INFINITY);
    this.upper = vector(o.upper, n, "upper", () => Number.POSITIVE_INFINITY);
    for (let j = 0; j < n; j++) {
      if (!(this.lower[j] <= this.upper[j])) throw new RangeError(`lower[${j}] lies above upper[${j}]`);
    }
    this.start = Float64Array.from(o.start, (x, j) => Math.min(Math.max(x, this.lower[j]), this.upper[j]));
    const typical = vector(o.scale, n, "scale", (j) => Math.abs(o.start[j])).map((s) => Math.abs(s) || 1);
    this.boxed = { evaluate: (p) => this.evaluate(p), lower: this.lower, upper: this.upper, typical };
    this.maxEvaluations = o.maxEvaluations ?? 2000 * (n + 1);
    this.tolerance = o.tolerance ?? 1e-10;
  }

  /** The best point from the start, or undefined where the start has no residuals. */
  run(): Point | undefined {
    const p = this.start;
    let best = this.point(p);
    if (!best) return undefined;
    const polish = this.o.polish ?? true;
    for (const accurate of this.o.jacobian || !polish ? [false] : [false, true]) {
      if (accurate && !this.o.scale) this.retype(best);
      [best, this.end] = this.descend(best, accurate);
      if (this.halted) break;
    }
    if (!polish || this.halted) return best;
    best = polished(best, this.lower, this.upper, {
      jacobian: (at) => this.jacobian(at, true),
      tryStep: (p, step) => this.tryStep(p, step),
      halted: () => this.halted !== undefined,
    });
    if (this.halted === "evaluations") this.halted = undefined; // it had arrived before they ran out
    return best;
  }

  /** What kept the search from converging. */
  get stopped(): "evaluations" | "cancelled" | "no-progress" | undefined {
    return this.halted ?? (this.end === "converged" ? undefined : this.end);
  }

  /** For the statistics: also a run that used up its evaluations gets it. */
  lastJacobian(at: Point): Float64Array {
    if (this.o.jacobian || (this.kept?.at === at && this.kept.accurate)) return this.jacobian(at, true);
    const evaluate = (p: Float64Array): ArrayLike<number> | undefined => this.residualsAt(p);
    return centralJacobian({ ...this.boxed, evaluate }, at.p, at.residuals);
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
      this.columnNorms = Float64Array.from({ length: n }, (_, j) => columnNorm(model, j));
      for (let j = 0; j < n; j++) d[j] = Math.max(d[j], this.columnNorms[j]);
      const scale = d.map((x) => x || 1);
      const size = scaledLength(at.p, scale);
      if (iteration === 0) radius = size || 1;
      const box = { p: at.p, lower: this.lower, upper: this.upper };
      if (slope(model, movable(model, box), at.sum) <= 1e-15) return [at, "converged"];
      for (;;) {
        const { step, damping } = trustStep(model, box, scale, radius);
        const next = this.tryStep(at.p, step);
        if (this.halted) return [at, "no-progress"];
        const made = next ? step.map((_, j) => next.p[j] - box.p[j]) : step; // shorter where it was cut back
        const length = scaledLength(made, scale);
        const promised = promisedFall(model, made);
        if (length === 0 || !(promised > 0)) return [at, "converged"];
        const gain = next ? at.sum - next.sum : Number.NEGATIVE_INFINITY;
        const ratio = gain / promised;
        if (ratio < 0.25)
          radius = Math.min(radius, length) * (gain > Number.NEGATIVE_INFINITY && ratio > -1 ? 0.5 : 0.1);
        else if (ratio > 0.75 || damping === 0) radius = Math.max(radius, 2 * length);
        const accepted = next !== undefined && ratio > 1e-4;
        if (accepted) at = next;
        const still = promised <= tolerance * at.sum && Math.abs(gain) <= tolerance * at.sum && ratio <= 2;
        if (still || (damping === 0 && length <= tolerance * size)) return [at, "converged"];
        if (radius <= (this.o.smallest ?? 1e-15) * size || radius < 1e-280) {
          // Beside a jump of the sum of squares there is nothing better near, whatever the slope on this side of it.
          const flat = this.o.smallest !== undefined || slope(model, movable(model, box), at.sum) < 1e-5;
          return [at, flat ? "converged" : "no-progress"];
        }
        if (accepted) break;
      }
    }
  }

  /**
   * Typical sizes for the accurate differences, from where the search ended rather than began: the parameter itself, or near 0
   * what changes the residuals by as much as they are.
   */
  private retype({ p, sum }: Point): void {
    const { typical } = this.boxed;
    for (let j = 0; j < this.n; j++) {
      const felt = this.columnNorms[j] > 0 ? Math.sqrt(sum) / this.columnNorms[j] : typical[j];
      typical[j] = Math.max(Math.abs(p[j]), Math.min(typical[j], felt)) || typical[j];
    }
  }

  /** The point a step away; a step that leaves what is allowed is cut back to where it does. */
  private tryStep(p: Float64Array, step: Float64Array): Point | undefined {
    const { allowed } = this.o;
    const reach = (fraction: number): Float64Array =>
      p.map((x, j) => Math.min(Math.max(x + fraction * step[j], this.lower[j]), this.upper[j]));
    const whole = reach(1);
    if (!allowed || allowed(whole)) return this.point(whole);
    let inside = 0;
    for (let outside = 1, round = 0; round < 5 || (inside === 0 && round < 40); round++) {
      const middle = (inside + outside) / 2;
      if (allowed(reach(middle))) inside = middle;
      else outside = middle;
    }
    return inside > 0 ? this.point(reach(inside)) : undefined;
  }

  private point(p: Float64Array): Point | undefined {
    const values = this.evaluate(p);
    if (!values) return undefined;
    const residuals = values instanceof Float64Array ? values.slice() : Float64Array.from(values);
    return { p, residuals, sum: sumOfSquares(residuals) };
  }

  private evaluate(p: Float64Array): ArrayLike<number> | undefined {
    if (this.o.cancelled?.()) this.halted ??= "cancelled";
    if (this.evaluations >= this.maxEvaluations) this.halted ??= "evaluations";
    return this.halted ? undefined : this.residualsAt(p);
  }

  private residualsAt(p: Float64Array): ArrayLike<number> | undefined {
    if (this.o.allowed?.(p) === false) return undefined;
    this.evaluations++;
    const values = this.o.residuals(p);
    return Number.isFinite(sumOfSquares(values)) ? values : undefined;
  }

  private jacobian(at: Point, accurate: boolean): Float64Array {
    const { kept } = this;
    if (kept?.at === at && (kept.accurate || !accurate)) return kept.jacobian;
    const given = this.o.jacobian?.(at.p);
    const jacobian = given
      ? flat(given, at.residuals.length, this.n)
      : (accurate ? centralJacobian : forwardJacobian)(this.boxed, at.p, at.residuals);
    if (!this.halted) this.kept = { at, accurate: accurate || given !== undefined, jacobian };
    return jacobian;
  }
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
  if (rows instanceof Float64Array) return rows;
  if (m === 0 || typeof rows[0] === "number") return Float64Array.from(rows as ArrayLike<number>);
  const jacobian = new Float64Array(m * n);
  for (let i = 0; i < m; i++) jacobian.set(rows[i] as ArrayLike<number>, i * n);
  return jacobian;
}
