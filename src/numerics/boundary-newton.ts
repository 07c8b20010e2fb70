import { bandedSolver } from "./banded-lu.js";
import { type CollocationMesh, collocation, stageCount as s } from "./collocation.js";
import { denseSolver } from "./dense-lu.js";
import { fullPattern, type LinearSolver, type Pattern } from "./linear-solver.js";

/**
 * A two-point boundary-value problem y' = f(y) on [0, 1]. Matrices are row-major.
 * The conditions are linear: left y(0) = fed and right y(1) = 0, as many together as y has components.
 */
export interface BoundaryProblem {
  readonly size: number;
  /** Writes f of the `size` values at y[at ...] into out[to ...]. */
  rhs(y: Float64Array, at: number, out: Float64Array, to: number): void;
  /** Writes df/dy, size x size, into out[to ...]. */
  jacobian(y: Float64Array, at: number, out: Float64Array, to: number): void;
  readonly left: Float64Array;
  readonly fed: Float64Array;
  readonly right: Float64Array;
  /** The first so many components are never let fall below a tenth of what they were in one step. */
  readonly positive: number;
}

/** Newton's method on one mesh, whose values it overwrites. */
export class BoundaryNewton {
  private readonly m: number;
  private readonly count: number;
  /** Collocation residuals, stage by stage. */
  private g: Float64Array;
  private gTrial: Float64Array;
  /** Per stage: how it moves with the right end of its stretch (m x m), and by itself (m). */
  private readonly through: Float64Array;
  private readonly own: Float64Array;
  private readonly stage: LinearSolver;
  private readonly stageMatrix: Float64Array;
  private readonly band: LinearSolver;
  private readonly bandMatrix: Float64Array;
  private readonly f: Float64Array;
  private readonly slope: Float64Array;
  private readonly step: { values: Float64Array; end: Float64Array };
  private readonly trial: { values: Float64Array; end: Float64Array };

  constructor(
    private readonly problem: BoundaryProblem,
    private readonly mesh: CollocationMesh,
  ) {
    const m = problem.size;
    const count = mesh.edges.length - 1;
    this.m = m;
    this.count = count;
    this.g = new Float64Array(count * s * m);
    this.gTrial = new Float64Array(count * s * m);
    this.through = new Float64Array(count * s * m * m);
    this.own = new Float64Array(count * s * m);
    this.stage = denseSolver(fullPattern(s * m), { tiny: 0 });
    this.stageMatrix = new Float64Array(s * m * s * m);
    const pattern = bandPattern(count, m, problem.fed.length);
    this.band = bandedSolver(pattern, { tiny: 0 });
    this.bandMatrix = new Float64Array(pattern.start[pattern.size]);
    this.f = new Float64Array(m);
    this.slope = new Float64Array(m * m);
    this.step = { values: new Float64Array(count * s * m), end: new Float64Array(m) };
    this.trial = { values: new Float64Array(count * s * m), end: new Float64Array(m) };
  }

  run(): boolean {
    const { mesh } = this;
    let norm = this.residual(mesh, this.g);
    for (let k = 0, small = 0; k < 60 && Number.isFinite(norm); k++) {
      if (!this.condense() || !this.direction()) return false;
      const last = small > 0;
      small = this.isSmall() ? small + 1 : 0;
      const next = small > 0 ? this.move(1, Number.POSITIVE_INFINITY) : this.descend(norm);
      if (next === undefined) return false;
      norm = next;
      if (last && small > 1) return true;
    }
    return false;
  }

  sensitivity(): Float64Array | undefined {
    const { m, problem } = this;
    const columns = problem.fed.length;
    if (!this.condense()) return undefined;
    const result = new Float64Array(m * columns);
    for (let j = 0; j < columns; j++) {
      const b = new Float64Array((this.count + 1) * m);
      b[j] = 1;
      this.band.solve(b);
      for (let k = 0; k < m; k++) result[k * columns + j] = b[this.count * m + k];
    }
    return result.every(Number.isFinite) ? result : undefined;
  }

  private endOf({ values, end }: Pick<CollocationMesh, "values" | "end">, e: number): Float64Array {
    const at = ((e + 1) * s + s - 1) * this.m;
    return e + 1 < this.count ? values.subarray(at, at + this.m) : end;
  }

  /** sum_j inverse_ij (Y_j - y_right) + h f(Y_i), and its norm with that of the conditions. */
  private residual(at: Pick<CollocationMesh, "values" | "end">, g: Float64Array): number {
    const { m, f, problem, mesh } = this;
    const { slopes } = collocation();
    const { values } = at;
    let sum = 0;
    for (let e = 0; e < this.count; e++) {
      const h = mesh.edges[e + 1] - mesh.edges[e];
      const right = this.endOf(at, e);
      for (let i = 0; i < s; i++) {
        const place = (e * s + i) * m;
        problem.rhs(values, place, f, 0);
        for (let k = 0; k < m; k++) {
          let r = h * f[k];
          for (let j = 0; j < s; j++) r += slopes[i * s + j] * (values[(e * s + j) * m + k] - right[k]);
          g[place + k] = r;
          sum += r * r;
        }
      }
    }
    for (let j = 0; j < m; j++) sum += this.condition(at, j) ** 2;
    return Math.sqrt(sum);
  }

  /** What is missing in condition j: those of the left end first. */
  private condition({ values, end }: Pick<CollocationMesh, "values" | "end">, j: number): number {
    const { m, problem } = this;
    const { left, fed, right } = problem;
    const start = (s - 1) * m;
    let sum = j < fed.length ? -fed[j] : 0;
    for (let k = 0; k < m; k++) {
      sum += j < fed.length ? left[j * m + k] * values[start + k] : right[(j - fed.length) * m + k] * end[k];
    }
    return sum;
  }

  /** Solves every stretch for its stages, given its right end, and factors what binds the ends. */
  private condense(): boolean {
    const { m, problem, mesh, stage, stageMatrix, slope, through, own, bandMatrix } = this;
    const { slopes } = collocation();
    const width = s * m;
    const column = new Float64Array(width);
    const nLeft = problem.fed.length;
    let put = 0;
    for (const x of problem.left) bandMatrix[put++] = x;
    for (let e = 0; e < this.count; e++) {
      const h = mesh.edges[e + 1] - mesh.edges[e];
      stageMatrix.fill(0);
      for (let i = 0; i < s; i++) {
        problem.jacobian(mesh.values, (e * s + i) * m, slope, 0);
        for (let k = 0; k < m; k++) {
          const row = (i * m + k) * width;
          for (let j = 0; j < s; j++) stageMatrix[row + j * m + k] += slopes[i * s + j];
          for (let l = 0; l < m; l++) stageMatrix[row + i * m + l] += h * slope[k * m + l];
        }
      }
      if (!stage.factor(stageMatrix)) return false;
      for (let l = 0; l < m; l++) {
        column.fill(0);
        for (let i = 0; i < s; i++) {
          let sum = 0;
          for (let j = 0; j < s; j++) sum += slopes[i * s + j];
          column[i * m + l] = sum;
        }
        stage.solve(column);
        for (let r = 0; r < width; r++) through[(e * width + r) * m + l] = column[r];
      }
      for (let r = 0; r < width; r++) column[r] = -this.g[e * width + r];
      stage.solve(column);
      own.set(column, e * width);
      for (let k = 0; k < m; k++) {
        for (let l = 0; l < m; l++) bandMatrix[put++] = k === l ? 1 : 0;
        const row = (e * width + (s - 1) * m + k) * m;
        for (let l = 0; l < m; l++) bandMatrix[put++] = -through[row + l];
      }
    }
    for (let k = 0; k < (m - nLeft) * m; k++) bandMatrix[put++] = problem.right[k];
    return this.band.factor(bandMatrix);
  }

  private direction(): boolean {
    const { m, count, own, through, step, mesh, problem } = this;
    const width = s * m;
    const nLeft = problem.fed.length;
    const b = new Float64Array((count + 1) * m);
    for (let j = 0; j < nLeft; j++) b[j] = -this.condition(mesh, j);
    for (let e = 0; e < count; e++) {
      for (let k = 0; k < m; k++) b[nLeft + e * m + k] = own[e * width + (s - 1) * m + k];
    }
    for (let j = nLeft; j < m; j++) b[count * m + j] = -this.condition(mesh, j);
    this.band.solve(b);
    step.end.set(b.subarray(count * m));
    for (let e = 0; e < count; e++) {
      for (let r = 0; r < width; r++) {
        let sum = own[e * width + r];
        for (let l = 0; l < m; l++) sum += through[(e * width + r) * m + l] * b[(e + 1) * m + l];
        step.values[e * width + r] = sum;
      }
    }
    return step.end.every(Number.isFinite) && step.values.every(Number.isFinite);
  }

  private isSmall(): boolean {
    const { step, mesh } = this;
    const small = (d: Float64Array, y: Float64Array): boolean =>
      d.every((x, k) => Math.abs(x) <= 1e-10 * Math.abs(y[k]) + 1e-13);
    return small(step.end, mesh.end) && small(step.values, mesh.values);
  }

  private descend(norm: number): number | undefined {
    for (let share = 1; share > 1e-4; share /= 2) {
      const next = this.move(share, norm * (1 - 1e-4 * share));
      if (next !== undefined) return next;
    }
    return undefined;
  }

  /** Moves by a share of the step unless the norm would exceed `below`. */
  private move(share: number, below: number): number | undefined {
    const { m, mesh, step, trial, problem } = this;
    const take = (y: Float64Array, d: Float64Array, out: Float64Array): void => {
      for (let k = 0; k < y.length; k++) {
        const to = y[k] + share * d[k];
        out[k] = k % m < problem.positive ? Math.max(to, 0.1 * y[k]) : to;
      }
    };
    take(mesh.values, step.values, trial.values);
    take(mesh.end, step.end, trial.end);
    const norm = this.residual(trial, this.gTrial);
    if (!(norm <= below) || !Number.isFinite(norm)) return undefined;
    mesh.values.set(trial.values);
    mesh.end.set(trial.end);
    [this.g, this.gTrial] = [this.gTrial, this.g];
    return norm;
  }
}

/** The conditions at the left, then m rows per stretch over its two ends, then the conditions at the right. */
function bandPattern(count: number, m: number, nLeft: number): Pattern {
  const size = (count + 1) * m;
  const start = new Int32Array(size + 1);
  const column: number[] = [];
  for (let row = 0; row < size; row++) {
    const e = Math.floor((row - nLeft) / m);
    const [first, width] = row < nLeft ? [0, m] : e < count ? [e * m, 2 * m] : [count * m, m];
    for (let k = 0; k < width; k++) column.push(first + k);
    start[row + 1] = column.length;
  }
  return { size, start, column: Int32Array.from(column) };
}
