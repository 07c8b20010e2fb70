import { describe, expect, test } from "vitest";
import { FlowBlocks } from "../../src/numerics/flow-blocks.js";
import { flowRows } from "../../src/numerics/flow-rows.js";
import { factor, solve } from "../../src/numerics/lu.js";
import { solveSmall } from "../../src/numerics/small-dense.js";
import { uniformSource } from "../simulate/seeded.js";

/** A random network with circles, links that come twice and links back to the node itself. */
function network(seed: number, size: number) {
  const random = uniformSource(seed);
  const pick = (): number => Math.floor(random() * size);
  const ends = Array.from({ length: 5 * size }, () => [pick(), pick()] as const);
  const from = Int32Array.from(ends, ([a]) => a);
  const to = Int32Array.from(ends, ([, b]) => b);
  const inflow = new Float64Array(size).fill(0.2);
  const flow = Float64Array.from(ends, () => 0.1 + random());
  flow.forEach((q, k) => {
    inflow[to[k]] += q;
  });
  return { graph: { size, from, to }, share: flow.map((q, k) => q / inflow[to[k]]), random };
}

describe.each([1, 2, 3, 4, 7])("blocks of %d", (n) => {
  test.each([false, true])("the solution is that of elimination; rows with a matrix of their own: %s", (special) => {
    const size = 40;
    const { graph, share, random } = network(7 + n, size);
    const rows = flowRows(graph, share);
    const blocks = new FlowBlocks(rows, n);
    const order = size * n;
    const dense = new Float64Array(order * order);
    for (let p = 0; p < size; p++) {
      const own = Float64Array.from({ length: n * n }, (_, e) => (e % (n + 1) === 0 ? 1 + random() : 0.2 * random()));
      const through =
        special && p % 3 === 0 ? Float64Array.from({ length: n * n }, () => (0.8 * random()) / n) : undefined;
      if (through) blocks.through.set(p, through);
      const at = (i: number, j: number): number => through?.[i * n + j] ?? (i === j ? 1 : 0);
      for (let i = 0; i < n; i++) {
        for (let j = 0; j < n; j++) {
          blocks.diagonal[(p * n + i) * n + j] = own[i * n + j] - rows.own[p] * at(i, j);
          dense[(p * n + i) * order + p * n + j] += own[i * n + j] - rows.own[p] * at(i, j);
          for (let e = rows.start[p]; e < rows.start[p + 1]; e++) {
            dense[(p * n + i) * order + rows.column[e] * n + j] -= at(i, j) * rows.share[e];
          }
        }
      }
    }
    const b = Float64Array.from({ length: order }, () => random() - 0.3);
    const x = new Float64Array(order);
    expect(blocks.factor()).toBe(true);
    expect(blocks.solve(b, x, { relative: 1e-13, most: 500 }).residual).toBeLessThan(1e-12);
    const lu = factor(dense, order);
    if (lu === "singular") throw new Error("singular");
    solve(lu, b);
    x.forEach((value, k) => {
      expect(value).toBeCloseTo(b[k], 10);
    });
  });
});

test("rows hold every link once, in flow order, with what nodes send to themselves apart", () => {
  const { graph, share } = network(3, 25);
  const { order, start, middle, column, share: value, own } = flowRows(graph, share);
  const sums = new Float64Array(25);
  for (let k = 0; k < share.length; k++) sums[graph.to[k]] += share[k];
  order.forEach((node, p) => {
    let sum = own[p];
    for (let e = start[p]; e < start[p + 1]; e++) {
      sum += value[e];
      expect(column[e] < p).toBe(e < middle[p]);
      if (e > start[p]) expect(column[e]).toBeGreaterThan(column[e - 1]);
    }
    expect(sum).toBeCloseTo(sums[node], 13);
  });
});

test("a small singular matrix is said, not divided by", () => {
  expect(solveSmall(Float64Array.of(1, 2, 2, 4), 0, 2, Float64Array.of(1, 1), 0, 1)).toBe(false);
});
