import fc from "fast-check";
import { expect, test } from "vitest";
import { type FlowTable, reconcileFlows } from "../../src/numerics/reconcile.js";

/** A row of cells with flow down it, exchange between neighbours and short cuts: balanced, then disturbed by up to `noise`. */
function disturbed(size: number, seed: number, noise: number) {
  let s = seed % 2147483647 || 1;
  const u = (): number => {
    s = (48271 * s) % 2147483647;
    return s / 2147483647;
  };
  const rows: [number, number, number][] = [[-1, 0, 1]];
  for (let i = 0; i < size; i++) {
    rows.push([i, i + 1 < size ? i + 1 : -1, 1]);
    if (i + 1 < size) {
      const q = 10 ** (2 * u() - 1);
      rows.push([i, i + 1, q], [i + 1, i, q]);
    }
    if (i + 3 < size) {
      const q = u();
      rows.push([i, i + 3, q], [i + 3, i, q]);
    }
  }
  const exact = Float64Array.from(rows, (r) => r[2]);
  const table: FlowTable = {
    size,
    from: Int32Array.from(rows, (r) => r[0]),
    to: Int32Array.from(rows, (r) => r[1]),
    flow: exact.map((q) => q * (1 + noise * (2 * u() - 1))),
  };
  return { table, exact };
}

const inletOf = ({ from, flow }: FlowTable): number => flow.reduce((sum, q, k) => (from[k] < 0 ? sum + q : sum), 0);

/** Largest |in - out| of a cell, relative to what passes it. */
function imbalance({ size, from, to }: FlowTable, flow: Float64Array): number {
  const net = new Float64Array(size);
  const passing = new Float64Array(size);
  flow.forEach((q, k) => {
    if (from[k] >= 0) {
      net[from[k]] -= q;
      passing[from[k]] += q;
    }
    if (to[k] >= 0) net[to[k]] += q;
  });
  return net.reduce((worst, d, i) => Math.max(worst, Math.abs(d) / passing[i]), 0);
}

const cases = fc.record({
  size: fc.integer({ min: 2, max: 60 }),
  seed: fc.integer({ min: 1, max: 2147483646 }),
  noise: fc.constantFrom(1e-9, 1e-6, 1e-3, 0.05),
});

test("every cell balances to round-off, inlets are kept, no change is larger than it need be", () => {
  fc.assert(
    fc.property(cases, ({ size, seed, noise }) => {
      const { table, exact } = disturbed(size, seed, noise);
      const inlet = inletOf(table);
      const flow = reconcileFlows(table, { inlets: Float64Array.of(inlet), outlets: undefined });
      if (flow === "impossible") return expect.unreachable();
      expect(imbalance(table, flow)).toBeLessThan(1e-14);
      expect(inletOf({ ...table, flow }) / inlet - 1).toBeCloseTo(0, 14);
      // At the smallest sum of squared relative changes they stand at right angles to every way of staying in balance.
      const other = exact.map((q) => q * inlet);
      let [along, sizes] = [0, 0];
      flow.forEach((q, k) => {
        const change = (q - table.flow[k]) / table.flow[k];
        const way = (q - other[k]) / table.flow[k];
        along += change * way;
        sizes += Math.abs(change * way);
      });
      expect(Math.abs(along)).toBeLessThan(1e-6 * sizes + 1e-24);
    }),
  );
});

test("given outlets are kept too", () => {
  const table: FlowTable = {
    size: 2,
    from: Int32Array.of(-1, -2, 0, 1, 1),
    to: Int32Array.of(0, 1, 1, -1, -2),
    flow: Float64Array.of(2, 1, 2.01, 1, 2.02),
  };
  const flow = reconcileFlows(table, { inlets: Float64Array.of(2, 1), outlets: Float64Array.of(0.9, 2.1) });
  expect(Array.from(flow as Float64Array, (q) => Number(q.toFixed(12)))).toEqual([2, 1, 2, 0.9, 2.1]);
});

test("what has no way out cannot be balanced, nor what would have to turn round", () => {
  const blind = {
    size: 2,
    from: Int32Array.of(-1, 0, 0),
    to: Int32Array.of(0, -1, 1),
    flow: Float64Array.of(1, 0.9, 0.1),
  };
  expect(reconcileFlows(blind, { inlets: Float64Array.of(1), outlets: undefined })).toBe("impossible");
});
