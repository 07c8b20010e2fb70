import { type Code, f64, i32, kernel, loopWhile, pair, type Variable } from "./wasm/assembler.js";
import { Kernels, type Workspace } from "./wasm/workspace.js";

/** Rows and columns of a square matrix as the kernels want it: a multiple of 8, what is added being 0. */
export const padded = (n: number): number => 8 * Math.ceil(n / 8);

/** Products of square row-major matrices of `padded` order, which lie in the workspace; nothing is allocated. */
export interface DenseProducts {
  /** y = A x; y is not x. */
  apply(a: Float64Array, x: Float64Array, y: Float64Array): void;
  /** C = A B; C is neither. */
  multiply(a: Float64Array, b: Float64Array, c: Float64Array): void;
}

/** @param order padded */
export function denseProducts(order: number, workspace: Workspace): DenseProducts {
  const run = workspace.load(kernels);
  const row = 8 * order;
  return {
    apply(a, x, y) {
      run.apply(a.byteOffset, x.byteOffset, y.byteOffset, y.byteOffset + row, row);
    },
    multiply(a, b, c) {
      run.multiply(a.byteOffset, b.byteOffset, c.byteOffset, c.byteOffset + order * row, row);
    },
  };
}

const on = (address: Variable, bytes: Code): Code => address.set(i32.add(address.get, bytes));
const eighth = [0, 16, 32, 48] as const;

const kernels = new Kernels(() => [
  kernel("apply", ["i32", "i32", "i32", "i32", "i32"], undefined, ([a, x, y, end, row], local) => {
    const [at, stop] = [local("i32"), local("i32")];
    const sums = eighth.map(() => local("v128"));
    const zero = pair.same(f64.of(0));
    return [
      loopWhile(
        i32.less(y.get, end.get),
        ...sums.map((s) => s.set(zero)),
        at.set(x.get),
        stop.set(i32.add(x.get, row.get)),
        loopWhile(
          i32.less(at.get, stop.get),
          ...eighth.map((by, k) =>
            sums[k].set(pair.add(sums[k].get, pair.mul(pair.load(a.get, by), pair.load(at.get, by)))),
          ),
          on(a, i32.of(64)),
          on(at, i32.of(64)),
        ),
        sums[0].set(pair.add(pair.add(sums[0].get, sums[1].get), pair.add(sums[2].get, sums[3].get))),
        f64.store(y.get, f64.add(pair.first(sums[0].get), pair.second(sums[0].get))),
        on(y, i32.of(8)),
      ),
    ];
  }),
  // A row of C, eight columns at a time: all rows of B, each times its entry in the row of A.
  kernel("multiply", ["i32", "i32", "i32", "i32", "i32"], undefined, ([a, b, c, end, row], local) => {
    const [entry, from, column, rowEnd] = [local("i32"), local("i32"), local("i32"), local("i32")];
    const sums = eighth.map(() => local("v128"));
    const zero = pair.same(f64.of(0));
    return [
      loopWhile(
        i32.less(c.get, end.get),
        column.set(b.get),
        rowEnd.set(i32.add(a.get, row.get)),
        loopWhile(
          i32.less(column.get, i32.add(b.get, row.get)),
          ...sums.map((s) => s.set(zero)),
          entry.set(a.get),
          from.set(column.get),
          loopWhile(
            i32.less(entry.get, rowEnd.get),
            ...eighth.map((by, k) =>
              sums[k].set(pair.add(sums[k].get, pair.mul(pair.loadSame(entry.get), pair.load(from.get, by)))),
            ),
            on(entry, i32.of(8)),
            on(from, row.get),
          ),
          ...eighth.map((by, k) => pair.store(c.get, sums[k].get, by)),
          on(c, i32.of(64)),
          on(column, i32.of(64)),
        ),
        a.set(rowEnd.get),
      ),
    ];
  }),
]);
