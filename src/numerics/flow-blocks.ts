import { bicgstab } from "./bicgstab.js";
import { factorKernels } from "./factor-kernels.js";
import type { FlowRows } from "./flow-rows.js";
import { FlowSweeps, stride } from "./flow-sweeps.js";
import type { Iterated, IterativeGoal, IterativeMethod } from "./krylov.js";
import { solveSmall } from "./small-dense.js";
import { compiledVectors } from "./vectors.js";
import { roomFor, Workspace } from "./wasm/workspace.js";

/**
 * A matrix of small square blocks on a flow network: row i is D_i x_i - B_i sum_j s_ij x_j, one share s_ij for all components;
 * B_i is 1 but in the rows given. Solved by BiCGStab behind the incomplete LU without fill, which on networks without
 * triangles changes the diagonal blocks alone, so that only those are kept; by Eisenstat's way both sweeps together cost
 * no more than one product. Set `diagonal` (and `through`), then `factor`, then `solve`.
 * @see J.A. Meijerink, H.A. van der Vorst, Math. Comp. 31 (1977) 148-162 (incomplete LU); S.C. Eisenstat, SIAM J. Sci. Stat.
 *      Comput. 2 (1981) 1-4; C. Pommerell, Solution of large unsymmetric systems of linear equations, ETH Zurich 1992 (D-ILU)
 */
export class FlowBlocks {
  /** D_i, row-major, by place. */
  readonly diagonal: Float64Array;
  /** B_i of the rows that have one, by place. */
  readonly through = new Map<number, Float64Array>();
  /** Delta_i^-1 B_i: what a sum over neighbours is multiplied with. By columns, as the sweeps want it. */
  private readonly sweep: Float64Array;
  /** Delta_i^-1 D_i - 2, by columns. */
  private readonly excess: Float64Array;
  /** Delta_i^-1 of the rows with a B_i, by columns. */
  private readonly inverse = new Map<number, Float64Array>();
  /** Rows and columns of a block as the sweeps have it. */
  private readonly m: number;
  private readonly sweeps: FlowSweeps;
  /** Of entries before the diagonal, as the sweeps have them: what elimination takes off. */
  private readonly pair: Float64Array;
  private readonly compiled: ReturnType<typeof loadFactors> | undefined;
  private readonly scratch: Float64Array;
  private readonly w: Float64Array;
  private readonly z: Float64Array;
  private readonly rhs: Float64Array;
  private readonly x: Float64Array;
  private readonly iterate: IterativeMethod;

  /** Bytes that blocks of n components take in a workspace. */
  static room(rows: FlowRows, n: number): number {
    const m = stride(n);
    const [vector, blocks] = [rows.size * m, rows.size * m * m];
    const floats = [...new Array<number>(9).fill(vector), blocks, blocks, rows.size * n * n, rows.pair.length];
    return FlowSweeps.room(rows) + roomFor({ floats });
  }

  /** @param n components of a block */
  constructor(
    private readonly rows: FlowRows,
    private readonly n: number,
    workspace = new Workspace(FlowBlocks.room(rows, n)),
  ) {
    const m = stride(n);
    const [vector, blocks] = [rows.size * m, rows.size * m * m];
    this.m = m;
    this.sweeps = new FlowSweeps(rows, n, workspace);
    this.sweep = workspace.floats(blocks);
    this.excess = workspace.floats(blocks);
    this.diagonal = workspace.floats(rows.size * n * n);
    this.pair = workspace.floats(this.sweeps.entriesBefore);
    for (let p = 0, at = 0; p < rows.size; p++) {
      for (let e = rows.start[p]; e < rows.middle[p]; e++) this.pair[at++] = rows.pair[e];
    }
    this.compiled = n <= 2 ? loadFactors(workspace) : undefined;
    this.scratch = new Float64Array(n * n + Math.max(m * m, n * n));
    const vectors = compiledVectors(vector, workspace);
    [this.w, this.z, this.rhs, this.x] = [vectors.make(), vectors.make(), vectors.make(), vectors.make()];
    this.iterate = bicgstab({ size: vector, multiply: (v, out) => this.apply(v, out), vectors });
  }

  /** False where a block of the factors is singular. */
  factor(): boolean {
    const { compiled, n, pair, diagonal, sweep, excess } = this;
    if (compiled && this.through.size === 0) {
      const { column, end } = this.sweeps.beforeAt;
      const of = n === 1 ? compiled.factor1 : compiled.factor2;
      const past = sweep.byteOffset + 8 * sweep.length;
      return of(pair.byteOffset, column, end, diagonal.byteOffset, sweep.byteOffset, excess.byteOffset, past) === 1;
    }
    const sum = this.scratch.subarray(this.n * this.n);
    for (let p = 0; p < this.rows.size; p++) if (!this.factorRow(p, sum)) return false;
    return true;
  }

  /** Delta_i = D_i less what elimination takes off it, and what the sweeps need of it. */
  private factorRow(p: number, sum: Float64Array): boolean {
    const { n, m, rows, diagonal, sweep, scratch } = this;
    const { start, middle, column, pair } = rows;
    const mm = m * m;
    for (let k = 0; k < mm; k++) sum[k] = 0;
    for (let e = start[p]; e < middle[p]; e++) {
      const back = pair[e];
      const from = column[e] * mm;
      for (let k = 0; k < mm; k++) sum[k] += back * sweep[from + k];
    }
    const b = this.through.size > 0 ? this.through.get(p) : undefined;
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let lost = sum[j * m + i];
        if (b) {
          lost = 0;
          for (let k = 0; k < n; k++) lost += b[i * n + k] * sum[j * m + k];
        }
        scratch[i * n + j] = diagonal[(p * n + i) * n + j] - lost;
      }
    }
    return this.invert(p, b);
  }

  /** From Delta_i in scratch. */
  private invert(p: number, b: Float64Array | undefined): boolean {
    const { n, m, scratch, sweep, excess, diagonal } = this;
    const nn = n * n;
    const at = p * m * m;
    if (n === 2) {
      const [a, c, d, e] = [scratch[0], scratch[1], scratch[2], scratch[3]];
      const det = a * e - c * d;
      if (!(Math.abs(det) > 1e-14 * (Math.abs(a * e) + Math.abs(c * d))) || !Number.isFinite(det)) return false;
      sweep[at] = e / det;
      sweep[at + 1] = -d / det;
      sweep[at + 2] = -c / det;
      sweep[at + 3] = a / det;
    } else {
      const unit = scratch.subarray(nn, 2 * nn);
      for (let k = 0; k < nn; k++) unit[k] = k % (n + 1) === 0 ? 1 : 0;
      if (!solveSmall(scratch, 0, n, unit, 0, n)) return false;
      for (let i = 0; i < n; i++) for (let j = 0; j < n; j++) sweep[at + j * m + i] = unit[i * n + j];
    }
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let value = i === j ? -2 : 0;
        for (let k = 0; k < n; k++) value += sweep[at + k * m + i] * diagonal[p * nn + k * n + j];
        excess[at + j * m + i] = value;
      }
    }
    if (!b) return true;
    const inverse = sweep.slice(at, at + m * m);
    this.inverse.set(p, inverse);
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let value = 0;
        for (let k = 0; k < n; k++) value += inverse[k * m + i] * b[k * n + j];
        sweep[at + j * m + i] = value;
      }
    }
    return true;
  }

  /**
   * Solves A x = b.
   * @param goal how far the residual (behind the first sweep) is to fall
   * @returns how far it fell
   */
  solve(b: Float64Array, x: Float64Array, goal: IterativeGoal): Iterated {
    const { n, m, sweep, sweeps, rhs } = this;
    this.scale(b, this.z);
    sweeps.fore(sweep, this.z, rhs);
    this.x.fill(0);
    const iterated = this.iterate(rhs, this.x, goal);
    sweeps.back(sweep, this.x, this.x);
    for (let p = 0; p < this.rows.size; p++) for (let i = 0; i < n; i++) x[p * n + i] = this.x[p * m + i];
    return iterated;
  }

  /** v_i = Delta_i^-1 b_i */
  private scale(b: Float64Array, v: Float64Array): void {
    const { n, m, rows, sweep } = this;
    const special = this.inverse.size > 0;
    for (let p = 0; p < rows.size; p++) {
      const inverse = special ? this.inverse.get(p) : undefined;
      const [from, at] = inverse ? [inverse, 0] : [sweep, p * m * m];
      for (let i = 0; i < n; i++) {
        let value = 0;
        for (let k = 0; k < n; k++) value += from[at + k * m + i] * b[p * n + k];
        v[p * m + i] = value;
      }
    }
  }

  /** What is left of A between the sweeps: v to w = (1 + Delta^-1 U)^-1 v, and w + (1 + Delta^-1 L)^-1 (v + (Delta^-1 D - 2) w). */
  private apply(v: Float64Array, out: Float64Array): void {
    const { sweep, excess, w, z, sweeps } = this;
    sweeps.back(sweep, v, w);
    sweeps.foreWith(sweep, v, excess, w, z, out);
  }
}

const loadFactors = (workspace: Workspace) => workspace.load(factorKernels);
