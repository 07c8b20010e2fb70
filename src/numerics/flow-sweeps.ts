import type { FlowRows } from "./flow-rows.js";
import { type Code, f64, i32, type Kernel, kernel, loopWhile, pair, type Variable } from "./wasm/assembler.js";
import { Kernels, roomFor, type Workspace } from "./wasm/workspace.js";

/** Shares of one side of the diagonal, row after row as they are swept. */
interface Side {
  readonly share: Float64Array;
  /** Where in a vector the block begins that a share is of, bytes. */
  readonly column: Int32Array;
  /** Address behind the last column of each row. */
  readonly end: Int32Array;
}

/** Numbers that a block of n components takes in a vector: even ones go two by two. */
export const stride = (n: number): number => (n === 1 ? 1 : n + (n & 1));

/**
 * Sweeps over rows in flow order by compiled loops: sums over neighbours before or behind, times a small matrix each. Vectors and
 * matrices lie in the workspace; a vector has `stride` numbers a row, a matrix that many columns of that many.
 */
export class FlowSweeps {
  private readonly before: Side;
  private readonly behind: Side;
  private readonly run: Readonly<Record<Name, (...values: number[]) => number>>;
  private readonly vector: number;

  /** Bytes that it takes in a workspace. */
  static room({ size, start }: FlowRows): number {
    return roomFor({ floats: [start[size]], ints: [start[size], size, size] }) + 256;
  }

  /** @param n components of a block */
  constructor(rows: FlowRows, n: number, workspace: Workspace) {
    const { size, start, middle } = rows;
    const m = stride(n);
    this.vector = 8 * m * size;
    const side = (descending: boolean): Side => {
      let entries = 0;
      for (let p = 0; p < size; p++) entries += descending ? start[p + 1] - middle[p] : middle[p] - start[p];
      const made = { share: workspace.floats(entries), column: workspace.ints(entries), end: workspace.ints(size) };
      for (let k = 0, at = 0; k < size; k++) {
        const p = descending ? size - 1 - k : k;
        const [from, to] = descending ? [middle[p], start[p + 1]] : [start[p], middle[p]];
        // The row that was done last comes last: all others are added up by the time it is.
        for (let n = 0; n < to - from; n++, at++) {
          const e = descending ? to - 1 - n : from + n;
          made.share[at] = rows.share[e];
          made.column[at] = 8 * m * rows.column[e];
        }
        made.end[k] = made.column.byteOffset + 4 * at;
      }
      return made;
    };
    this.before = side(false);
    this.behind = side(true);
    this.run = workspace.load(usual.get(m) ?? kernelsOf(m));
  }

  /** Entries before the diagonal, and where they lie: of each the row that it is of, in bytes of a vector, and where rows end. */
  get entriesBefore(): number {
    return this.before.share.length;
  }

  get beforeAt(): { readonly column: number; readonly end: number } {
    return { column: this.before.column.byteOffset, end: this.before.end.byteOffset };
  }

  /** w_i = v_i + S_i (what comes from behind); w may be v. */
  back(sweep: Float64Array, v: Float64Array, w: Float64Array): void {
    const { share, column, end } = this.behind;
    const past = 8 * sweep.length;
    this.run.back(
      share.byteOffset,
      column.byteOffset,
      end.byteOffset,
      sweep.byteOffset + past,
      v.byteOffset + this.vector,
      w.byteOffset + this.vector,
      w.byteOffset,
    );
  }

  /** z_i = v_i + S_i (what comes from before); z may be v. */
  fore(sweep: Float64Array, v: Float64Array, z: Float64Array): void {
    const { share, column, end } = this.before;
    this.run.fore(
      share.byteOffset,
      column.byteOffset,
      end.byteOffset,
      sweep.byteOffset,
      v.byteOffset,
      z.byteOffset,
      z.byteOffset + this.vector,
    );
  }

  /** The same of v_i + X_i w_i; out is w + z. */
  foreWith(
    sweep: Float64Array,
    v: Float64Array,
    excess: Float64Array,
    w: Float64Array,
    z: Float64Array,
    out: Float64Array,
  ): void {
    const { share, column, end } = this.before;
    this.run.foreWith(
      share.byteOffset,
      column.byteOffset,
      end.byteOffset,
      sweep.byteOffset,
      v.byteOffset,
      z.byteOffset,
      z.byteOffset + this.vector,
      excess.byteOffset,
      w.byteOffset,
      out.byteOffset,
    );
  }
}

type Name = "back" | "fore" | "foreWith";

const kernelsOf = (m: number): Kernels<Name> => new Kernels<Name>(() => [back(m), fore(m), foreWith(m)]);
/** By stride, of those that are translated once for all. */
const usual: ReadonlyMap<number, Kernels<Name>> = new Map([1, 2, 4, 6].map((m) => [m, kernelsOf(m)]));

const addresses = (count: number): "i32"[] => new Array<"i32">(count).fill("i32");
const by = (address: Variable, bytes: number): Code => address.set(i32.add(address.get, i32.of(bytes)));

/** A block of m numbers in locals, one number or pairs of them. */
class Block {
  private readonly parts: readonly Variable[];

  constructor(
    private readonly m: number,
    local: (type: "f64" | "v128") => Variable,
  ) {
    this.parts = m === 1 ? [local("f64")] : Array.from({ length: m / 2 }, () => local("v128"));
  }

  clear(): Code[] {
    return this.parts.map((p) => p.set(this.m === 1 ? f64.of(0) : pair.same(f64.of(0))));
  }

  load(from: Code): Code[] {
    return this.parts.map((p, k) => p.set(this.m === 1 ? f64.load(from) : pair.load(from, 16 * k)));
  }

  store(to: Code): Code[] {
    return this.parts.map((p, k) => (this.m === 1 ? f64.store(to, p.get) : pair.store(to, p.get, 16 * k)));
  }

  /** += the number at `factor` times the block at `address`. */
  addTimes(factor: Code, address: Code): Code[] {
    return this.parts.map((p, k) =>
      this.m === 1
        ? p.set(f64.add(p.get, f64.mul(f64.load(factor), f64.load(address))))
        : p.set(pair.add(p.get, pair.mul(pair.loadSame(factor), pair.load(address, 16 * k)))),
    );
  }

  /** += the matrix at `matrix`, column by column, times numbers each standing twice. */
  addProduct(matrix: Code, numbers: readonly Code[]): Code[] {
    return this.parts.flatMap((p, k) =>
      numbers.map((x, j) =>
        this.m === 1
          ? p.set(f64.add(p.get, f64.mul(f64.load(matrix), x)))
          : p.set(pair.add(p.get, pair.mul(pair.load(matrix, 8 * j * this.m + 16 * k), x))),
      ),
    );
  }

  add(other: Block): Code[] {
    const sum = this.m === 1 ? f64.add : pair.add;
    return this.parts.map((p, k) => p.set(sum(p.get, other.parts[k].get)));
  }

  /** Its numbers, each standing twice (alone where it is one). */
  numbers(): Code[] {
    if (this.m === 1) return [this.parts[0].get];
    return this.parts.flatMap((p) => [pair.same(pair.first(p.get)), pair.same(pair.second(p.get))]);
  }
}

/** The same for numbers in memory. */
const numbersAt = (m: number, address: Code): Code[] =>
  Array.from({ length: m }, (_, j) => (m === 1 ? f64.load(address) : pair.loadSame(address, 8 * j)));

/** Sums shares times blocks of a vector into `sum`, as long as the row goes on. */
function gather(share: Variable, column: Variable, end: Code, vector: Code, sum: Block): Code[] {
  return [
    ...sum.clear(),
    loopWhile(
      i32.less(column.get, end),
      ...sum.addTimes(share.get, i32.add(vector, i32.load(column.get))),
      by(share, 8),
      by(column, 4),
    ),
  ];
}

/** Descending: sweep, v and w are given behind their last row. */
const back = (m: number): Kernel<Name> =>
  kernel<Name>("back", addresses(7), undefined, ([share, column, end, sweep, v, w, first], local) => {
    const [sum, out] = [new Block(m, local), new Block(m, local)];
    return [
      loopWhile(
        i32.less(first.get, w.get),
        by(sweep, -8 * m * m),
        by(v, -8 * m),
        by(w, -8 * m),
        ...gather(share, column, i32.load(end.get), first.get, sum),
        by(end, 4),
        ...out.load(v.get),
        ...out.addProduct(sweep.get, sum.numbers()),
        ...out.store(w.get),
      ),
    ];
  });

const fore = (m: number): Kernel<Name> =>
  kernel<Name>("fore", addresses(7), undefined, ([share, column, end, sweep, v, z, past], local) => {
    const first = local("i32");
    const [sum, out] = [new Block(m, local), new Block(m, local)];
    return [
      first.set(z.get),
      loopWhile(
        i32.less(z.get, past.get),
        ...gather(share, column, i32.load(end.get), first.get, sum),
        ...out.load(v.get),
        ...out.addProduct(sweep.get, sum.numbers()),
        ...out.store(z.get),
        by(end, 4),
        by(sweep, 8 * m * m),
        by(v, 8 * m),
        by(z, 8 * m),
      ),
    ];
  });

const foreWith = (m: number): Kernel<Name> =>
  kernel<Name>("foreWith", addresses(10), undefined, (given, local) => {
    const [share, column, end, sweep, v, z, past, excess, w, both] = given;
    const first = local("i32");
    const [sum, out, own] = [new Block(m, local), new Block(m, local), new Block(m, local)];
    return [
      first.set(z.get),
      loopWhile(
        i32.less(z.get, past.get),
        ...gather(share, column, i32.load(end.get), first.get, sum),
        ...out.load(v.get),
        ...out.addProduct(excess.get, numbersAt(m, w.get)),
        ...out.addProduct(sweep.get, sum.numbers()),
        ...out.store(z.get),
        ...own.load(w.get),
        ...out.add(own),
        ...out.store(both.get),
        by(end, 4),
        by(sweep, 8 * m * m),
        by(excess, 8 * m * m),
        by(v, 8 * m),
        by(z, 8 * m),
        by(w, 8 * m),
        by(both, 8 * m),
      ),
    ];
  });
