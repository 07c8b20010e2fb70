import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { balanceSolver } from "../../src/numerics/balance-solver.js";
import { flowOrder } from "../../src/numerics/flow-order.js";
import { gth } from "../../src/numerics/gth.js";

/** Cells in a ring with links across it; each gets `fresh` from outside. Flows in and out of a cell are alike. */
function ring(size: number, seed: number, fresh: number) {
  let s = seed % 2147483647 || 1;
  const u = (): number => {
    s = (48271 * s) % 2147483647;
    return s / 2147483647;
  };
  const [from, to, flow]: number[][] = [[], [], []];
  const inflow = new Float64Array(size).fill(fresh);
  const link = (a: number, b: number, q: number): void => {
    from.push(a);
    to.push(b);
    flow.push(q);
    inflow[b] += q;
  };
  for (let i = 0; i < size; i++) {
    link(i, (i + 1) % size, 1);
    const j = Math.floor(size * u());
    const q = 10 ** (4 * u() - 2);
    if (j !== i) {
      link(i, j, q);
      link(j, i, q);
    }
  }
  return {
    graph: { size, from: Int32Array.from(from), to: Int32Array.from(to) },
    flow: Float64Array.from(flow),
    inflow,
  };
}

const cases = fc.record({
  size: fc.integer({ min: 2, max: 120 }),
  seed: fc.integer({ min: 1, max: 2147483646 }),
  fresh: fc.constantFrom(1, 1e-2, 1e-4),
});

describe.each(["iteration", "sums alone"])("balances by %s", (way) => {
  test("give back the solution that they were made from", () => {
    fc.assert(
      fc.property(cases, ({ size, seed, fresh }) => {
        const { graph, flow, inflow } = ring(size, seed, fresh);
        const x = Float64Array.from({ length: size }, (_, i) => 1 + ((i * 7919) % 13));
        const excess = inflow.map((q) => fresh / q);
        const part = flow.map((q, k) => q / inflow[graph.to[k]]);
        const b = excess.map((e, i) => e * x[i]);
        part.forEach((w, k) => {
          b[graph.to[k]] += w * (x[graph.to[k]] - x[graph.from[k]]);
        });
        if (way === "iteration") expect(balanceSolver(graph, part, excess)?.solve(b)).toBe(true);
        else {
          const a = new Float64Array(size * size);
          part.forEach((w, k) => {
            a[graph.to[k] * size + graph.from[k]] += w;
          });
          const factors = gth(a, excess);
          if (factors !== "singular") factors.solve(b);
        }
        const error = b.reduce((worst, y, i) => Math.max(worst, Math.abs(y / x[i] - 1)), 0);
        expect(error).toBeLessThan(3e-13 / fresh);
      }),
    );
  });
});

test("sums alone keep every digit, however often the flow goes round", () => {
  // Two tanks of 1 m3, 1 m3/s through, r back and forth: ages V/Q (1 + r), and 2 V/Q at the outlet.
  for (const r of [1, 1e6, 1e12, 1e15]) {
    const b = Float64Array.of(1 / (1 + r), 1 / (1 + r));
    const factors = gth(Float64Array.of(0, r / (1 + r), 1, 0), Float64Array.of(1 / (1 + r), 0));
    if (factors === "singular") expect.unreachable();
    else factors.solve(b);
    expect(b[1] / 2 - 1).toBeCloseTo(0, 15);
  }
});

test("nothing from outside has no solution", () => {
  expect(gth(Float64Array.of(0, 1, 1, 0), new Float64Array(2))).toBe("singular");
});

test("without circles the flow order is one of substitution", () => {
  const from = Int32Array.of(4, 2, 0, 3, 3, 1);
  const to = Int32Array.of(2, 0, 3, 1, 5, 5);
  const order = flowOrder({ size: 6, from, to }, new Float64Array(6).fill(1), Float64Array.of(1, 1, 1, 1, 1, 2));
  const place = (i: number): number => order.indexOf(i);
  for (let k = 0; k < from.length; k++) expect(place(from[k])).toBeLessThan(place(to[k]));
});
