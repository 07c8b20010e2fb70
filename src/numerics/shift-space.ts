import { factor, solve } from "./lu.js";
import type { MixedRows } from "./mixed-rows.js";
import { type ShiftedSolver, shiftedSolver } from "./shift-invert.js";
import { compiledVectors, type Vectors } from "./vectors.js";
import { roomFor, Workspace } from "./wasm/workspace.js";

/**
 * Small picture of a large flow: the space of (shift - A)^-k x, k = 0, 1, ..., orthonormal by weight, in which x' = A x becomes
 * a small dense system. However fast the fastest cells, a few dozen vectors do, each a solve with one and the same matrix.
 * @see J. van den Eshof, M. Hochbruck, SIAM J. Sci. Comput. 27 (2006) 1438-1457; I. Moret, P. Novati, BIT 44 (2004) 595-615
 */
export class ShiftSpace {
  /** Vectors so far, by state, each component times the root of its weight; the last is not part of the picture yet. */
  readonly basis: Float64Array[] = [];
  /** Did a solve not get there? */
  failed = false;
  /** Norm of x. */
  readonly length: number;
  private readonly columns: Float64Array[] = [];
  private readonly solver: ShiftedSolver | undefined;
  private readonly root: Float64Array;
  private readonly vectors: Vectors;
  private readonly right: Float64Array;
  private readonly found: Float64Array;

  /** @param most vectors that there will be, the first included */
  constructor(
    private readonly rows: MixedRows,
    private readonly shift: number,
    start: Float64Array,
    weight: Float64Array,
    private readonly most: number,
  ) {
    const { size, states } = rows;
    this.solver = shiftedSolver(rows, shift);
    const workspace = new Workspace(roomFor({ floats: new Array<number>(most).fill(states) }));
    this.vectors = compiledVectors(states, workspace);
    this.root = weight.map(Math.sqrt);
    this.right = new Float64Array(states);
    this.found = new Float64Array(size);
    const first = this.vectors.make();
    for (let i = 0; i < states; i++) first[i] = start[i] * this.root[i];
    this.length = Math.sqrt(this.vectors.dot(first, first));
    for (let i = 0; i < states; i++) first[i] /= this.length;
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
    const { basis, root, vectors, right, found, rows } = this;
    if (basis.length === this.most) return false;
    const last = basis[basis.length - 1];
    for (let i = 0; i < rows.states; i++) right[i] = last[i] / root[i];
    if (!this.solver?.solve(right, found)) {
      this.failed = true;
      return false;
    }
    const next = vectors.make();
    for (let i = 0; i < rows.states; i++) next[i] = found[i] * root[i];
    const column = new Float64Array(basis.length + 1);
    const before = Math.sqrt(vectors.dot(next, next));
    for (let pass = 0; pass < 2; pass++) {
      for (let j = 0; j < basis.length; j++) {
        const along = vectors.dot(basis[j], next);
        column[j] += along;
        vectors.add(next, -along, basis[j]);
      }
    }
    const rest = Math.sqrt(vectors.dot(next, next));
    const grown = rest > 1e-14 * before;
    column[basis.length] = grown ? rest : 0;
    this.columns.push(column);
    if (!grown) return false;
    for (let i = 0; i < rows.states; i++) next[i] /= rest;
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
    const parts = this.partsOf(unknown);
    return Float64Array.from({ length: this.order }, (_, j) => {
      let sum = 0;
      for (const [i, part] of parts) sum += (part * this.basis[j][i]) / this.root[i];
      return this.length * sum;
    });
  }

  /** The same for the sum of all states times their volumes. */
  total(volume: Float64Array): Float64Array {
    return Float64Array.from({ length: this.order }, (_, j) => {
      let sum = 0;
      for (let i = 0; i < volume.length; i++) sum += (volume[i] * this.basis[j][i]) / this.root[i];
      return this.length * sum;
    });
  }

  /** The states that an unknown is made of, and how much of each. */
  private partsOf(unknown: number): Map<number, number> {
    const { states, start, column, value } = this.rows;
    const parts = new Map<number, number>();
    const whole = new Map([[unknown, 1]]);
    // An unknown that holds nothing comes after those that it is made of.
    for (const [at, part] of whole) if (at < states) parts.set(at, part);
    for (let i = unknown; i >= states; i--) {
      const part = whole.get(i);
      if (part === undefined) continue;
      for (let e = start[i]; e < start[i + 1]; e++) {
        const into = column[e] < states ? parts : whole;
        into.set(column[e], (into.get(column[e]) ?? 0) + part * value[e]);
      }
    }
    return parts;
  }
}
