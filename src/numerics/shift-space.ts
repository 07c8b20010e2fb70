import { factor, solve } from "./lu.js";
import { type MixedRows, settle } from "./mixed-rows.js";
import { type ShiftedSolver, shiftedSolver } from "./shift-invert.js";

/**
 * Small picture of a large flow: the space of (shift - A)^-k x, k = 0, 1, ..., orthonormal by weight, in which x' = A x becomes
 * a small dense system. However fast the fastest cells, a few dozen vectors do, each a solve with one and the same matrix.
 * @see J. van den Eshof, M. Hochbruck, SIAM J. Sci. Comput. 27 (2006) 1438-1457; I. Moret, P. Novati, BIT 44 (2004) 595-615
 */
export class ShiftSpace {
  /** Vectors so far; the last is not part of the picture yet. */
  readonly basis: Float64Array[] = [];
  /** Did a solve not get there? */
  failed = false;
  /** Norm of x. */
  readonly length: number;
  private readonly columns: Float64Array[] = [];
  private readonly solver: ShiftedSolver | undefined;
  private readonly work: Float64Array;

  constructor(
    private readonly rows: MixedRows,
    private readonly shift: number,
    start: Float64Array,
    private readonly weight: Float64Array,
  ) {
    this.solver = shiftedSolver(rows, shift);
    this.work = new Float64Array(rows.size);
    this.length = Math.sqrt(inner(start, start, weight));
    const first = start.slice();
    for (let i = 0; i < first.length; i++) first[i] /= this.length;
    settle(rows, first);
    this.basis.push(first);
  }

  get order(): number {
    return this.columns.length;
  }

  get products(): number {
    return this.solver?.products ?? 0;
  }

  /** A vector more. False where a solve failed, or there is nothing new: the picture is whole then. */
  grow(): boolean {
    const { basis, work, weight, rows } = this;
    if (!this.solver) {
      this.failed = true;
      return false;
    }
    const next = new Float64Array(rows.size);
    work.fill(0);
    work.set(basis[basis.length - 1].subarray(0, rows.states));
    if (!this.solver.solve(work, next)) {
      this.failed = true;
      return false;
    }
    const column = new Float64Array(basis.length + 1);
    const before = Math.sqrt(inner(next, next, weight));
    for (let pass = 0; pass < 2; pass++) {
      for (let j = 0; j < basis.length; j++) {
        const along = inner(basis[j], next, weight);
        column[j] += along;
        const v = basis[j];
        for (let i = 0; i < rows.states; i++) next[i] -= along * v[i];
      }
    }
    const rest = Math.sqrt(inner(next, next, weight));
    const grown = rest > 1e-14 * before;
    column[basis.length] = grown ? rest : 0;
    this.columns.push(column);
    if (!grown) return false;
    for (let i = 0; i < rows.states; i++) next[i] /= rest;
    settle(rows, next);
    basis.push(next);
    return true;
  }

  /** The small system: shift - H^-1, row-major; undefined where H is singular. */
  matrix(): Float64Array | undefined {
    const m = this.order;
    const h = new Float64Array(m * m);
    this.columns.forEach((column, j) => {
      for (let i = 0; i < Math.min(m, column.length); i++) h[i * m + j] = column[i];
    });
    const lu = factor(h, m);
    if (lu === "singular") return undefined;
    const t = new Float64Array(m * m);
    const unit = new Float64Array(m);
    for (let j = 0; j < m; j++) {
      unit.fill(0);
      unit[j] = 1;
      solve(lu, unit);
      for (let i = 0; i < m; i++) t[i * m + j] = (i === j ? this.shift : 0) - unit[i];
    }
    return t;
  }

  /** What a look at one unknown sees of each vector, for x as it is long. */
  look(unknown: number): Float64Array {
    return Float64Array.from({ length: this.order }, (_, j) => this.length * this.basis[j][unknown]);
  }

  /** The same for the sum of all states times their volumes. */
  total(volume: Float64Array): Float64Array {
    return Float64Array.from({ length: this.order }, (_, j) => {
      let sum = 0;
      for (let i = 0; i < volume.length; i++) sum += volume[i] * this.basis[j][i];
      return this.length * sum;
    });
  }
}

function inner(x: Float64Array, y: Float64Array, weight: Float64Array): number {
  let sum = 0;
  for (let i = 0; i < weight.length; i++) sum += weight[i] * x[i] * y[i];
  return sum;
}
