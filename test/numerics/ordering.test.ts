import fc from "fast-check";
import { expect, test } from "vitest";
import type { Pattern } from "../../src/numerics/linear-solver.js";
import { minimumDegree } from "../../src/numerics/ordering.js";
import { sparseRows } from "../../src/numerics/sparse.js";
import { flowMatrix, lattice, renumbered, shuffled } from "./flow-matrix.js";

/** Entries that elimination in this order adds to the graph of A + A', plus those it had; above the diagonal. */
function filled({ size, start, column }: Pattern, order: ArrayLike<number>): number {
  const near = Array.from({ length: size }, () => new Set<number>());
  for (let i = 0; i < size; i++)
    for (let k = start[i]; k < start[i + 1]; k++)
      if (column[k] !== i) {
        near[i].add(column[k]);
        near[column[k]].add(i);
      }
  let count = 0;
  for (let k = 0; k < size; k++) {
    const node = order[k];
    const tied = [...near[node]];
    count += tied.length;
    for (const a of tied) {
      near[a].delete(node);
      for (const b of tied) if (a !== b) near[a].add(b);
    }
  }
  return count;
}

/** The same, choosing the true least degree each time: what the approximation is measured by. */
function exactMinimumDegree(pattern: Pattern): number[] {
  const near = Array.from({ length: pattern.size }, () => new Set<number>());
  for (let i = 0; i < pattern.size; i++)
    for (let k = pattern.start[i]; k < pattern.start[i + 1]; k++)
      if (pattern.column[k] !== i) {
        near[i].add(pattern.column[k]);
        near[pattern.column[k]].add(i);
      }
  const left = new Set(near.keys());
  const order: number[] = [];
  while (left.size > 0) {
    let best = -1;
    for (const i of left) if (best < 0 || near[i].size < near[best].size) best = i;
    left.delete(best);
    order.push(best);
    for (const a of near[best]) {
      near[a].delete(best);
      for (const b of near[best]) if (a !== b) near[a].add(b);
    }
  }
  return order;
}

test("is a permutation, for any pattern", () => {
  fc.assert(
    fc.property(fc.integer({ min: 0, max: 60 }), fc.integer({ min: 0, max: 5 }), fc.integer(), (n, links, seed) => {
      const order = minimumDegree(flowMatrix(n, links, Math.abs(seed) + 1));
      expect([...order].sort((a, b) => a - b)).toEqual(Array.from({ length: n }, (_, i) => i));
    }),
    { numRuns: 200 },
  );
});

test("fills little more in than the true minimum degree", () => {
  for (let seed = 1; seed < 15; seed++) {
    const a = flowMatrix(150, 1 + (seed % 3), seed);
    expect(filled(a, minimumDegree(a))).toBeLessThan(1.1 * filled(a, exactMinimumDegree(a)) + 20);
  }
});

test("a chain, a star and a tree fill nothing in, however numbered", () => {
  const tie = (n: number, other: (i: number) => number) =>
    sparseRows(Array.from({ length: n }, (_, i) => new Map(i === 0 ? [[0, 1]] : [[other(i), 1]])));
  for (const shape of [tie(300, (i) => i - 1), tie(300, () => 0), tie(300, (i) => (i - 1) >> 1)]) {
    const a = renumbered(shape, shuffled(300, 9));
    expect(filled(a, minimumDegree(a))).toBe(299);
  }
});

test("a cube of cells stays well under its natural order", () => {
  const a = lattice(8, 1);
  const natural = Int32Array.from({ length: a.size }, (_, i) => i);
  expect(filled(a, minimumDegree(a))).toBeLessThan(0.6 * filled(a, natural));
});
