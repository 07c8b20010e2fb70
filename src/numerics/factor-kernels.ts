import { type Code, either, f64, i32, type Kernel, kernel, loopWhile, type Variable } from "./wasm/assembler.js";
import { Kernels } from "./wasm/workspace.js";

type Name = "factor1" | "factor2";

const on = (address: Variable, bytes: number): Code => address.set(i32.add(address.get, i32.of(bytes)));

/**
 * Factors of all rows, one after the other: pivot = diagonal - sum of pair times sweep of rows before; sweep becomes its inverse and
 * excess that inverse times the diagonal, less 2; matrices of the sweeps by columns. The result is 1 where all pivots are sound.
 */
const factorOf = (n: 1 | 2): Kernel<Name> =>
  kernel<Name>(`factor${n}`, new Array<"i32">(7).fill("i32"), "f64", (given, local) => {
    const [pair, column, end, diagonal, sweep, excess, past] = given;
    const cells = Array.from({ length: n * n }, (_, e) => e);
    const numbers = (): Variable[] => cells.map(() => local("f64"));
    const [d, pivot, inverse] = [numbers(), numbers(), numbers()];
    const [first, det, sound] = [local("i32"), local("f64"), local("f64")];
    /** Row-major place of what stands at e by columns. */
    const turned = (e: number): number => (e % n) * n + Math.floor(e / n);
    const from = i32.add(first.get, i32.shiftLeft(i32.load(column.get), n - 1));
    const [a, b, c, e] = pivot;
    const invert: Code[] =
      n === 1
        ? [inverse[0].set(f64.div(f64.of(1), a.get)), det.set(a.get)]
        : [
            det.set(f64.sub(f64.mul(a.get, e.get), f64.mul(b.get, c.get))),
            inverse[0].set(f64.div(e.get, det.get)),
            inverse[1].set(f64.div(f64.sub(f64.of(0), b.get), det.get)),
            inverse[2].set(f64.div(f64.sub(f64.of(0), c.get), det.get)),
            inverse[3].set(f64.div(a.get, det.get)),
          ];
    const size = n === 1 ? f64.of(0) : f64.add(f64.abs(f64.mul(a.get, e.get)), f64.abs(f64.mul(b.get, c.get)));
    const least = n === 1 ? f64.of(0) : f64.mul(f64.of(1e-14), size);
    const product = (i: number, j: number): Code =>
      n === 1
        ? f64.mul(inverse[0].get, d[0].get)
        : f64.add(f64.mul(inverse[i * 2].get, d[j].get), f64.mul(inverse[i * 2 + 1].get, d[2 + j].get));
    return [
      first.set(sweep.get),
      sound.set(f64.of(1)),
      loopWhile(
        i32.less(sweep.get, past.get),
        ...cells.flatMap((k) => [d[k].set(f64.load(diagonal.get, 8 * k)), pivot[k].set(d[k].get)]),
        loopWhile(
          i32.less(column.get, i32.load(end.get)),
          ...cells.map((k) =>
            pivot[k].set(f64.sub(pivot[k].get, f64.mul(f64.load(pair.get), f64.load(from, 8 * turned(k))))),
          ),
          on(pair, 8),
          on(column, 4),
        ),
        ...invert,
        either(
          i32.and(f64.less(least, f64.abs(det.get)), f64.less(f64.abs(det.get), f64.of(Number.MAX_VALUE))),
          [],
          [sound.set(f64.of(0))],
        ),
        ...cells.flatMap((k) => [
          f64.store(sweep.get, inverse[k].get, 8 * turned(k)),
          f64.store(
            excess.get,
            f64.sub(product(Math.floor(k / n), k % n), f64.of(k % (n + 1) === 0 ? 2 : 0)),
            8 * turned(k),
          ),
        ]),
        on(end, 4),
        on(diagonal, 8 * n * n),
        on(sweep, 8 * n * n),
        on(excess, 8 * n * n),
      ),
      sound.get,
    ];
  });

export const factorKernels = new Kernels<Name>(() => [factorOf(1), factorOf(2)]);
