import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { bandedSolver, bandwidth } from "../../src/numerics/banded-lu.js";
import { bandedComplexSolver } from "../../src/numerics/banded-lu-complex.js";
import { denseComplexSolver } from "../../src/numerics/complex-lu.js";
import { denseSolver } from "../../src/numerics/dense-lu.js";
import { entryPattern } from "../../src/numerics/entry-pattern.js";
import { krylovSolver } from "../../src/numerics/krylov-solver.js";
import {
  type ComplexLinearSolver,
  type LinearSolver,
  measure,
  type Pattern,
  scales,
} from "../../src/numerics/linear-solver.js";
import { minimumDegree } from "../../src/numerics/ordering.js";
import { sparseSolver } from "../../src/numerics/sparse-lu.js";
import { sparseComplexSolver } from "../../src/numerics/sparse-lu-complex.js";
import { choosePivots } from "../../src/numerics/sparse-lu-pivots.js";
import { uniformSource } from "../simulate/seeded.js";
import { flowMatrix, fromDense, lattice, renumbered, shuffled, sparseBackwardError, toDense } from "./flow-matrix.js";
import { backwardError, contract } from "./linear-solver-contract.js";

const direct: Record<string, (p: Pattern) => LinearSolver> = {
  dense: denseSolver,
  banded: bandedSolver,
  sparse: sparseSolver,
};
const complex: Record<string, (p: Pattern) => ComplexLinearSolver> = {
  dense: denseComplexSolver,
  banded: bandedComplexSolver,
  sparse: sparseComplexSolver,
};
/** A complex solver asked real questions. */
const asReal =
  (make: (p: Pattern) => ComplexLinearSolver) =>
  (p: Pattern): LinearSolver => {
    const solver = make(p);
    return {
      size: p.size,
      factor: (value) => solver.factor(value, new Float64Array(value.length)),
      solve: (b) => solver.solve(b, new Float64Array(b.length)),
    };
  };
/** One whose matrix and unknowns are turned by a quarter: (i A) x = i b. */
const turned =
  (make: (p: Pattern) => ComplexLinearSolver) =>
  (p: Pattern): LinearSolver => {
    const solver = make(p);
    return {
      size: p.size,
      factor: (value) => solver.factor(new Float64Array(value.length), value),
      solve: (b) => {
        const zero = new Float64Array(b.length);
        const right = b.slice();
        const solved = solver.solve(zero, right);
        b.set(zero);
        return solved;
      },
    };
  };

for (const [name, make] of [
  ...Object.entries(direct),
  ...Object.entries(complex).map(([k, m]) => [`complex ${k}`, asReal(m)] as const),
  ...Object.entries(complex).map(([k, m]) => [`imaginary ${k}`, turned(m)] as const),
]) {
  contract(`${name} solver`, (a, n, b) => {
    const matrix = fromDense(a, n);
    const solver = make(matrix);
    if (!solver.factor(matrix.value)) return "singular";
    solver.solve(b);
    return b.map((v) => v + 0); // no minus zero
  });
}

const onDiagonal = { tiny: 0, onDiagonal: true };
const all: Record<string, (p: Pattern) => LinearSolver> = {
  ...direct,
  "sparse, on the diagonal": (p) => sparseSolver(p, onDiagonal),
  "complex sparse, on the diagonal": asReal((p) => sparseComplexSolver(p, onDiagonal)),
  "complex dense": asReal(denseComplexSolver),
  "complex banded": asReal(bandedComplexSolver),
  "complex sparse": asReal(sparseComplexSolver),
  bicgstab: (p) => krylovSolver(p),
  gmres: (p) => krylovSolver(p, { method: "gmres" }),
};
/** Backward error: rounding of n steps for elimination; what an iteration was asked for, and the spread of the rates, for Krylov. */
const within = (name: string, n: number): number =>
  name === "gmres" || name === "bicgstab" ? 1e-9 : (8 + 4 * n) * Number.EPSILON;

describe.each(Object.entries(all))("%s on balances of flow networks", (name, make) => {
  const someFlow = fc.record({
    n: fc.integer({ min: 1, max: 40 }),
    links: fc.integer({ min: 0, max: 3 }),
    seed: fc.integer({ min: 1, max: 1e6 }),
  });

  test("solves them, one after the other in the same buffers", () => {
    fc.assert(
      fc.property(someFlow, ({ n, links, seed }) => {
        const a = flowMatrix(n, links, seed);
        const solver = make(a);
        const random = uniformSource(seed + 1);
        for (let round = 0; round < 3; round++) {
          // Once as it is, once with more on the diagonal, once with signs that make it no M-matrix.
          const value = a.value.map((v) => (round === 0 || v < 0 ? v : v * (1 + random()) + (round === 2 ? 100 : 0)));
          // Pivots on the diagonal alone are for balances.
          if (round === 2 && !name.endsWith("diagonal")) for (let k = 0; k < value.length; k += 2) value[k] *= -1;
          const kept = value.slice();
          if (!solver.factor(value)) throw new Error("not singular");
          expect(value).toEqual(kept);
          const b = Float64Array.from({ length: n }, () => random());
          const x = b.slice();
          expect(solver.solve(x)).toBe(true);
          // Only with pivots on the diagonal of an M-matrix is every row good by itself.
          const rowByRow = sparseBackwardError({ ...a, value }, x, b);
          const whole = backwardError(toDense({ ...a, value }), n, x, b);
          expect(round < 2 && name.includes("sparse") ? rowByRow : whole).toBeLessThan(within(name, n));
        }
      }),
      { numRuns: 40 },
    );
  });

  test("does not care how the cells are numbered", () => {
    fc.assert(
      fc.property(someFlow, ({ n, links, seed }) => {
        const a = flowMatrix(n, links, seed);
        const p = shuffled(n, seed);
        const moved = renumbered(a, p);
        const b = Float64Array.from({ length: n }, (_, i) => 1 / (i + 1));
        const x = b.slice();
        const y = new Float64Array(n);
        b.forEach((v, i) => {
          y[p[i]] = v;
        });
        const [one, other] = [make(a), make(moved)];
        expect(one.factor(a.value) && other.factor(moved.value)).toBe(true);
        expect(one.solve(x) && other.solve(y)).toBe(true);
        const size = Math.max(...x.map(Math.abs));
        for (let i = 0; i < n; i++) expect(Math.abs(x[i] - y[p[i]])).toBeLessThan(1e-9 * size);
      }),
      { numRuns: 30 },
    );
  });

  test("an empty row is singular, and the solver is fit for the next matrix", () => {
    const a = flowMatrix(12, 2, 7);
    const solver = make(a);
    const value = a.value.slice();
    value.fill(0, a.start[5], a.start[6]);
    expect(solver.factor(value)).toBe(false);
    expect(solver.factor(a.value)).toBe(true);
    const x = new Float64Array(12).fill(1);
    expect(solver.solve(x)).toBe(true);
    expect(sparseBackwardError(a, x, new Float64Array(12).fill(1))).toBeLessThan(within(name, 12));
  });
});

const balances: Record<string, (p: Pattern) => ComplexLinearSolver> = {
  ...complex,
  "sparse, on the diagonal": (p) => sparseComplexSolver(p, onDiagonal),
};

describe.each(Object.entries(balances))("complex %s", (_name, make) => {
  test("solves a balance with imaginary parts of any sign", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 30 }), fc.integer({ min: 1, max: 1e6 }), (n, seed) => {
        const a = flowMatrix(n, 2, seed);
        const random = uniformSource(seed);
        const im = a.value.map(() => random() - 0.5);
        const solver = make(a);
        expect(solver.factor(a.value, im)).toBe(true);
        const [bRe, bIm] = [a.value.slice(0, n), im.slice(0, n)];
        const [xRe, xIm] = [bRe.slice(), bIm.slice()];
        expect(solver.solve(xRe, xIm)).toBe(true);
        let [residual, norm] = [0, 0];
        for (let i = 0; i < n; i++) {
          let [re, imag, row] = [-bRe[i], -bIm[i], 0];
          for (let k = a.start[i]; k < a.start[i + 1]; k++) {
            const j = a.column[k];
            re += a.value[k] * xRe[j] - im[k] * xIm[j];
            imag += a.value[k] * xIm[j] + im[k] * xRe[j];
            row += Math.hypot(a.value[k], im[k]);
          }
          residual = Math.max(residual, Math.hypot(re, imag));
          norm = Math.max(norm, row);
        }
        const largest = xRe.reduce((m, re, i) => Math.max(m, Math.hypot(re, xIm[i])), 0);
        expect(residual).toBeLessThan(1e-14 * (norm * largest + 1));
      }),
      { numRuns: 40 },
    );
  });
});

test.each([
  ["sparse", sparseSolver],
  ["complex sparse", asReal(sparseComplexSolver)],
])("%s: pivots that suited one matrix are left where they do not suit the next", (_name, make) => {
  const at = (diagonal: number, beside: number) =>
    fromDense([diagonal, beside, 0, beside, diagonal, beside, 1, 0, 5], 3);
  const solver = make(at(4, 1));
  for (const a of [at(4, 1), at(1e-13, 1), at(2, 1e-9)]) {
    expect(solver.factor(a.value)).toBe(true);
    const b = Float64Array.of(1, 2, 3);
    const x = b.slice();
    solver.solve(x);
    expect(sparseBackwardError(a, x, b)).toBeLessThan(1e-15);
  }
});

describe("large", () => {
  const ones = (n: number) => Float64Array.from({ length: n }, (_, i) => 1 + (i % 3));

  test.each([
    ["10,000 cells in a line, mixed along it", () => flowMatrix(10_000, 2, 3, 20)],
    ["2,197 cells of a cube", () => lattice(13, 5)],
  ])("sparse elimination: %s", (_name, matrix) => {
    const a = matrix();
    const solver = sparseSolver(a);
    const b = ones(a.size);
    const x = b.slice();
    expect(solver.factor(a.value) && solver.solve(x)).toBe(true);
    expect(sparseBackwardError(a, x, b)).toBeLessThan(1e-13);
  });

  test.each(["bicgstab", "gmres"] as const)("%s agrees with elimination on a cube", (method) => {
    const a = lattice(10, 5);
    const [x, y] = [ones(a.size), ones(a.size)];
    const [one, other] = [krylovSolver(a, { method }), sparseSolver(a)];
    expect(one.factor(a.value) && one.solve(x) && other.factor(a.value) && other.solve(y)).toBe(true);
    const size = Math.max(...y);
    for (let i = 0; i < a.size; i++) expect(Math.abs(x[i] - y[i])).toBeLessThan(1e-10 * size);
  });

  test("incomplete elimination is exact for a chain in flow order", () => {
    const a = flowMatrix(10_000, 0, 1);
    const solver = krylovSolver(a, { most: 1 });
    const x = new Float64Array(a.size);
    x[0] = 1;
    expect(solver.factor(a.value) && solver.solve(x)).toBe(true);
    expect(x.every((v) => v === 1)).toBe(true);
  });

  test("a band is found as it is", () => {
    expect(bandwidth(flowMatrix(50, 0, 1))).toEqual({ below: 1, above: 0 });
    expect(bandwidth(lattice(3, 1))).toEqual({ below: 9, above: 9 });
  });
});

describe("Krylov", () => {
  test("says so when it does not get there", () => {
    const a = lattice(8, 2);
    const solver = krylovSolver(a, { most: 3 });
    expect(solver.factor(a.value)).toBe(true);
    expect(solver.solve(new Float64Array(a.size).fill(1))).toBe(false);
  });

  test("a right-hand side of zero is answered with zero", () => {
    const a = flowMatrix(9, 1, 4);
    for (const method of ["gmres", "bicgstab"] as const) {
      const solver = krylovSolver(a, { method });
      solver.factor(a.value);
      const x = new Float64Array(9);
      expect(solver.solve(x)).toBe(true);
      expect(x.every((v) => v === 0)).toBe(true);
    }
  });
});

test("pivots on the diagonal: the factors of a matrix do not depend on those before it", () => {
  const a = flowMatrix(30, 2, 8);
  const im = a.value.map((v, k) => v * Math.sin(k));
  const answer = (before: readonly number[]): Float64Array => {
    const solver = sparseComplexSolver(a, onDiagonal);
    for (const f of before) {
      solver.factor(
        a.value.map((v) => v * f),
        im.map((v) => v / f),
      );
    }
    expect(solver.factor(a.value, im)).toBe(true);
    const [re, other] = [new Float64Array(30).fill(1), new Float64Array(30)];
    solver.solve(re, other);
    return re;
  };
  expect(answer([1e3, 1e-3])).toEqual(answer([]));
});

describe("an entry pattern", () => {
  test("has every entry once, columns ascending, the diagonal whole", () => {
    const links = fc.array(fc.tuple(fc.nat({ max: 8 }), fc.nat({ max: 8 })), { maxLength: 40 });
    fc.assert(
      fc.property(links, (pairs) => {
        const [row, column] = [pairs.map(([i]) => i), pairs.map(([, j]) => j)];
        const { pattern, at, diagonal } = entryPattern(9, row, column);
        const wanted = new Set([...pairs.map(([i, j]) => `${i},${j}`), ...Array.from(diagonal, (_, i) => `${i},${i}`)]);
        const rowOf = (e: number): number => pattern.start.findLastIndex((first) => first <= e);
        const found = [...pattern.column].map((j, e) => `${rowOf(e)},${j}`);
        expect(new Set(found)).toEqual(wanted);
        expect(found).toHaveLength(wanted.size);
        expect([...at].map((e) => found[e])).toEqual(pairs.map(([i, j]) => `${i},${j}`));
        expect([...diagonal].map((e) => found[e])).toEqual([...Array.from(diagonal, (_, i) => `${i},${i}`)]);
        for (let i = 0; i < 9; i++) {
          const own = pattern.column.subarray(pattern.start[i], pattern.start[i + 1]);
          expect(own).toEqual(own.slice().sort());
        }
      }),
    );
  });

  test("a chain with side pockets fills nothing in", () => {
    const n = 2000; // even: the chain; odd: pockets
    const [row, column]: number[][] = [[], []];
    const both = (i: number, j: number): void => {
      row.push(i, j);
      column.push(j, i);
    };
    for (let i = 0; i + 2 < n; i += 2) both(i, i + 2);
    for (let i = 0; i < n; i += 2) both(i, i + 1);
    const { pattern, diagonal } = entryPattern(n, row, column);
    const value = new Float64Array(pattern.column.length).fill(-1);
    for (const e of diagonal) value[e] = 5;
    const size = scales(n);
    measure(pattern, value, undefined, size);
    const pivots = choosePivots(pattern, minimumDegree(pattern), value, undefined, size, 0, 0);
    expect(pivots && pivots.lRow.length + pivots.uRow.length + n).toBe(row.length + n);
  });
});
