import { bicgstab } from "./bicgstab.js";
import type { FlowRows } from "./flow-rows.js";
import type { IterativeMethod } from "./krylov.js";
import { solveSmall } from "./small-dense.js";

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
  /** Delta_i^-1 B_i: what a sum over neighbours is multiplied with. */
  private readonly sweep: Float64Array;
  /** Delta_i^-1 D_i - 2. */
  private readonly excess: Float64Array;
  /** Delta_i^-1 of the rows with a B_i. */
  private readonly inverse = new Map<number, Float64Array>();
  private readonly scratch: Float64Array;
  private readonly w: Float64Array;
  private readonly z: Float64Array;
  private readonly rhs: Float64Array;
  private readonly iterate: IterativeMethod;

  /** @param n components of a block */
  constructor(
    private readonly rows: FlowRows,
    private readonly n: number,
  ) {
    const blocks = rows.size * n * n;
    this.diagonal = new Float64Array(blocks);
    this.sweep = new Float64Array(blocks);
    this.excess = new Float64Array(blocks);
    this.scratch = new Float64Array(2 * n * n);
    const vector = (): Float64Array => new Float64Array(rows.size * n);
    [this.w, this.z, this.rhs] = [vector(), vector(), vector()];
    this.iterate = bicgstab({ size: rows.size * n, multiply: (v, out) => this.apply(v, out) });
  }

  /** False where a block of the factors is singular. */
  factor(): boolean {
    const sum = this.scratch.subarray(this.n * this.n);
    for (let p = 0; p < this.rows.size; p++) if (!this.factorRow(p, sum)) return false;
    return true;
  }

  /** Delta_i = D_i less what elimination takes off it, and what the sweeps need of it. */
  private factorRow(p: number, sum: Float64Array): boolean {
    const { n, rows, diagonal, sweep, scratch } = this;
    const { start, middle, column, pair } = rows;
    const nn = n * n;
    for (let k = 0; k < nn; k++) sum[k] = 0;
    for (let e = start[p]; e < middle[p]; e++) {
      const back = pair[e];
      const from = column[e] * nn;
      for (let k = 0; k < nn; k++) sum[k] += back * sweep[from + k];
    }
    const b = this.through.size > 0 ? this.through.get(p) : undefined;
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let lost = sum[i * n + j];
        if (b) {
          lost = 0;
          for (let k = 0; k < n; k++) lost += b[i * n + k] * sum[k * n + j];
        }
        scratch[i * n + j] = diagonal[p * nn + i * n + j] - lost;
      }
    }
    return this.invert(p, p * nn, b);
  }

  /** From Delta_i in scratch. */
  private invert(p: number, at: number, b: Float64Array | undefined): boolean {
    const { n, scratch, sweep, excess, diagonal } = this;
    const nn = n * n;
    if (n === 2 && !b) {
      const [a, c, d, e] = [scratch[0], scratch[1], scratch[2], scratch[3]];
      const det = a * e - c * d;
      if (!(Math.abs(det) > 1e-14 * (Math.abs(a * e) + Math.abs(c * d))) || !Number.isFinite(det)) return false;
      sweep[at] = e / det;
      sweep[at + 1] = -c / det;
      sweep[at + 2] = -d / det;
      sweep[at + 3] = a / det;
    } else {
      for (let k = 0; k < nn; k++) sweep[at + k] = k % (n + 1) === 0 ? 1 : 0;
      if (!solveSmall(scratch, 0, n, sweep, at, n)) return false;
    }
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let value = i === j ? -2 : 0;
        for (let k = 0; k < n; k++) value += sweep[at + i * n + k] * diagonal[at + k * n + j];
        excess[at + i * n + j] = value;
      }
    }
    if (!b) return true;
    const inverse = sweep.slice(at, at + nn);
    this.inverse.set(p, inverse);
    for (let i = 0; i < n; i++) {
      for (let j = 0; j < n; j++) {
        let value = 0;
        for (let k = 0; k < n; k++) value += inverse[i * n + k] * b[k * n + j];
        sweep[at + i * n + j] = value;
      }
    }
    return true;
  }

  /**
   * Solves A x = b.
   * @param relative how far the residual (behind the first sweep) is to fall
   * @param most products of the iteration after which it gives up
   * @returns how far it fell
   */
  solve(b: Float64Array, x: Float64Array, relative: number, most: number): number {
    this.scale(b, this.z);
    this.foreSweep(this.z, this.rhs);
    x.fill(0);
    const { residual } = this.iterate(this.rhs, x, { relative, most, rough: true });
    this.backSweep(x, x);
    return residual;
  }

  /** v_i = Delta_i^-1 b_i */
  private scale(b: Float64Array, v: Float64Array): void {
    const { n, rows, sweep } = this;
    const special = this.inverse.size > 0;
    for (let p = 0; p < rows.size; p++) {
      const inverse = special ? this.inverse.get(p) : undefined;
      for (let i = 0; i < n; i++) {
        let value = 0;
        for (let k = 0; k < n; k++) {
          value += (inverse ? inverse[i * n + k] : sweep[(p * n + i) * n + k]) * b[p * n + k];
        }
        v[p * n + i] = value;
      }
    }
  }

  /** z_i = v_i + Delta_i^-1 B_i (what comes from before); z may be v. */
  private foreSweep(v: Float64Array, z: Float64Array): void {
    const { n, rows, sweep } = this;
    const { start, middle, column, share } = rows;
    const nn = n * n;
    const sum = this.scratch;
    for (let p = 0; p < rows.size; p++) {
      for (let k = 0; k < n; k++) sum[k] = 0;
      for (let e = start[p]; e < middle[p]; e++) {
        for (let k = 0; k < n; k++) sum[k] += share[e] * z[column[e] * n + k];
      }
      for (let i = 0; i < n; i++) {
        let value = v[p * n + i];
        for (let k = 0; k < n; k++) value += sweep[p * nn + i * n + k] * sum[k];
        z[p * n + i] = value;
      }
    }
  }

  /** w_i = v_i + Delta_i^-1 B_i (what comes from behind); w may be v. */
  private backSweep(v: Float64Array, w: Float64Array): void {
    const { n, rows, sweep } = this;
    const { start, middle, column, share } = rows;
    const nn = n * n;
    const sum = this.scratch;
    for (let p = rows.size - 1; p >= 0; p--) {
      for (let k = 0; k < n; k++) sum[k] = 0;
      for (let e = middle[p]; e < start[p + 1]; e++) {
        for (let k = 0; k < n; k++) sum[k] += share[e] * w[column[e] * n + k];
      }
      for (let i = 0; i < n; i++) {
        let value = v[p * n + i];
        for (let k = 0; k < n; k++) value += sweep[p * nn + i * n + k] * sum[k];
        w[p * n + i] = value;
      }
    }
  }

  /** What is left of A between the sweeps: v to w = (1 + Delta^-1 U)^-1 v, and w + (1 + Delta^-1 L)^-1 (v + (Delta^-1 D - 2) w). */
  private apply(v: Float64Array, out: Float64Array): void {
    const { n, rows, excess, w, z } = this;
    const nn = n * n;
    if (n === 2) {
      this.applyTwo(v, out);
      return;
    }
    this.backSweep(v, w);
    for (let p = 0; p < rows.size; p++) {
      for (let i = 0; i < n; i++) {
        let value = v[p * n + i];
        for (let k = 0; k < n; k++) value += excess[p * nn + i * n + k] * w[p * n + k];
        z[p * n + i] = value;
      }
    }
    this.foreSweep(z, z);
    for (let k = 0; k < out.length; k++) out[k] = w[k] + z[k];
  }

  /** The same for two components, which most chemistries come down to. */
  private applyTwo(v: Float64Array, out: Float64Array): void {
    const { rows, sweep, excess, w, z } = this;
    const { start, middle, column, share, size } = rows;
    for (let p = size - 1; p >= 0; p--) {
      let [a, b] = [0, 0];
      for (let e = middle[p]; e < start[p + 1]; e++) {
        const c = column[e] << 1;
        const s = share[e];
        a += s * w[c];
        b += s * w[c + 1];
      }
      const m = p << 2;
      const q = p << 1;
      w[q] = v[q] + sweep[m] * a + sweep[m + 1] * b;
      w[q + 1] = v[q + 1] + sweep[m + 2] * a + sweep[m + 3] * b;
    }
    for (let p = 0; p < size; p++) {
      let [a, b] = [0, 0];
      for (let e = start[p]; e < middle[p]; e++) {
        const c = column[e] << 1;
        const s = share[e];
        a += s * z[c];
        b += s * z[c + 1];
      }
      const m = p << 2;
      const q = p << 1;
      const [f, g] = [w[q], w[q + 1]];
      const first = v[q] + excess[m] * f + excess[m + 1] * g + sweep[m] * a + sweep[m + 1] * b;
      const second = v[q + 1] + excess[m + 2] * f + excess[m + 3] * g + sweep[m + 2] * a + sweep[m + 3] * b;
      z[q] = first;
      z[q + 1] = second;
      out[q] = f + first;
      out[q + 1] = g + second;
    }
  }
}
