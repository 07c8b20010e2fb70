import { type Code, f64, i32, kernel, loopWhile, pair, type Variable } from "./wasm/assembler.js";
import { Kernels, type Workspace } from "./wasm/workspace.js";

/** Vectors of one length, and what iterative methods do with them. None of the operations allocates. */
export interface Vectors {
  /** A new one, all 0. */
  make(): Float64Array;
  dot(x: Float64Array, y: Float64Array): number;
  /** y += a x */
  add(y: Float64Array, a: number, x: Float64Array): void;
  /** The next direction: p <- r + beta (p - omega v). */
  turn(p: Float64Array, r: Float64Array, v: Float64Array, beta: number, omega: number): void;
  /** x += step way, r -= step moved; returns the norm of r. */
  advance(x: Float64Array, step: number, way: Float64Array, r: Float64Array, moved: Float64Array): number;
}

/** Plain typed arrays. Loops stand in functions of their own, where they are compiled best. */
export const plainVectors = (length: number): Vectors => ({ make: () => new Float64Array(length), ...plain });

const plain: Omit<Vectors, "make"> = {
  dot(x, y) {
    let sum = 0;
    for (let i = 0; i < x.length; i++) sum += x[i] * y[i];
    return sum;
  },
  add(y, a, x) {
    for (let i = 0; i < y.length; i++) y[i] += a * x[i];
  },
  turn(p, r, v, beta, omega) {
    for (let i = 0; i < p.length; i++) p[i] = r[i] + beta * (p[i] - omega * v[i]);
  },
  advance(x, step, way, r, moved) {
    let squares = 0;
    for (let i = 0; i < r.length; i++) {
      x[i] += step * way[i];
      const rest = r[i] - step * moved[i];
      r[i] = rest;
      squares += rest * rest;
    }
    return Math.sqrt(squares);
  },
};

/** In a workspace, by compiled loops, two numbers at a time; all vectors that are handed over lie in it. */
export function compiledVectors(length: number, workspace: Workspace): Vectors {
  const run = workspace.load(kernels);
  // Arrays begin 64 bytes apart: what stands between them is 0 and may be counted.
  const bytes = 32 * Math.ceil(length / 4);
  return {
    make: () => workspace.floats(length),
    dot: (x, y) => run.dot(x.byteOffset, y.byteOffset, x.byteOffset + bytes),
    add(y, a, x) {
      run.add(y.byteOffset, x.byteOffset, y.byteOffset + bytes, a);
    },
    turn(p, r, v, beta, omega) {
      run.turn(p.byteOffset, r.byteOffset, v.byteOffset, p.byteOffset + bytes, beta, omega);
    },
    advance: (x, step, way, r, moved) =>
      Math.sqrt(run.advance(x.byteOffset, way.byteOffset, r.byteOffset, moved.byteOffset, r.byteOffset + bytes, step)),
  };
}

/** The sum over both of two accumulators. */
const summed = (one: Variable, two: Variable): Code[] => [
  one.set(pair.add(one.get, two.get)),
  f64.add(pair.first(one.get), pair.second(one.get)),
];

const on = (address: Variable): Code => address.set(i32.add(address.get, i32.of(32)));
const halves = [0, 16] as const;

const kernels = new Kernels(() => [
  kernel("dot", ["i32", "i32", "i32"], "f64", ([x, y, end], local) => {
    const sums = [local("v128"), local("v128")];
    return [
      loopWhile(
        i32.less(x.get, end.get),
        ...halves.map((at, k) =>
          sums[k].set(pair.add(sums[k].get, pair.mul(pair.load(x.get, at), pair.load(y.get, at)))),
        ),
        on(x),
        on(y),
      ),
      ...summed(sums[0], sums[1]),
    ];
  }),
  kernel("add", ["i32", "i32", "i32", "f64"], undefined, ([y, x, end, a], local) => {
    const factor = local("v128");
    return [
      factor.set(pair.same(a.get)),
      loopWhile(
        i32.less(y.get, end.get),
        ...halves.map((at) =>
          pair.store(y.get, pair.add(pair.load(y.get, at), pair.mul(factor.get, pair.load(x.get, at))), at),
        ),
        on(x),
        on(y),
      ),
    ];
  }),
  kernel("turn", ["i32", "i32", "i32", "i32", "f64", "f64"], undefined, ([p, r, v, end, b, o], local) => {
    const [beta, omega] = [local("v128"), local("v128")];
    return [
      beta.set(pair.same(b.get)),
      omega.set(pair.same(o.get)),
      loopWhile(
        i32.less(p.get, end.get),
        ...halves.map((at) => {
          const less = pair.sub(pair.load(p.get, at), pair.mul(omega.get, pair.load(v.get, at)));
          return pair.store(p.get, pair.add(pair.load(r.get, at), pair.mul(beta.get, less)), at);
        }),
        on(p),
        on(r),
        on(v),
      ),
    ];
  }),
  kernel("advance", ["i32", "i32", "i32", "i32", "i32", "f64"], "f64", ([x, way, r, moved, end, by], local) => {
    const [step, rest] = [local("v128"), local("v128")];
    const sums = [local("v128"), local("v128")];
    return [
      step.set(pair.same(by.get)),
      loopWhile(
        i32.less(r.get, end.get),
        ...halves.flatMap((at, k) => [
          pair.store(x.get, pair.add(pair.load(x.get, at), pair.mul(step.get, pair.load(way.get, at))), at),
          rest.set(pair.sub(pair.load(r.get, at), pair.mul(step.get, pair.load(moved.get, at)))),
          pair.store(r.get, rest.get, at),
          sums[k].set(pair.add(sums[k].get, pair.mul(rest.get, rest.get))),
        ]),
        on(x),
        on(way),
        on(r),
        on(moved),
      ),
      ...summed(sums[0], sums[1]),
    ];
  }),
]);
