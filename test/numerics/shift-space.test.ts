import { describe, expect, test } from "vitest";
import type { MixedRows } from "../../src/numerics/mixed-rows.js";
import { ReducedFlow } from "../../src/numerics/reduced-flow.js";
import { ShiftSpace } from "../../src/numerics/shift-space.js";
import { gatherRows } from "../../src/numerics/sparse.js";
import { uniformSource } from "../simulate/seeded.js";

describe("a small dense flow", () => {
  test("is the exponential and its integrals, at rates a million apart and any time", () => {
    // Two cells that empty one into the other, 1 and 1e6 1/s.
    const [a, b] = [1, 1e6];
    const flow = new ReducedFlow(Float64Array.of(-a, 0, a, -b), 2, 10);
    for (const t of [0, 1e-7, 3e-6, 0.3, 2.9, 10]) {
      const [x, y] = [...flow.at(t, 0)];
      expect(Math.abs(x - Math.exp(-a * t))).toBeLessThan(1e-14);
      expect(Math.abs(y - (a / (b - a)) * (Math.exp(-a * t) - Math.exp(-b * t)))).toBeLessThan(1e-15);
      expect(Math.abs(flow.at(t, 1)[0] + Math.expm1(-t))).toBeLessThan(1e-13);
      expect(Math.abs(flow.at(t, 2)[0] - (t + Math.expm1(-t)))).toBeLessThan(1e-12);
      expect(Math.abs(flow.at(t, 3)[0] - ((t * t) / 2 - t - Math.expm1(-t)))).toBeLessThan(1e-11);
    }
  });
});

describe("the space of a shifted solve", () => {
  test("is whole when there are as many vectors as cells: then it is the flow itself", () => {
    const n = 9;
    const random = uniformSource(4);
    const entries: [number, number, number][] = [];
    for (let i = 0; i < n; i++) {
      entries.push([i, i, -3 - random()]);
      for (const j of [(i + 1) % n, (i + 4) % n]) entries.push([i, j, random()]);
    }
    const column = (k: number) => entries.map((e) => e[k]);
    const rows: MixedRows = { ...gatherRows(n, column(0), column(1), column(2)), states: n };
    const start = Float64Array.from({ length: n }, () => random());
    const space = new ShiftSpace(rows, 2, start, new Float64Array(n).fill(1), n + 1);
    while (space.grow());
    expect(space.failed).toBe(false);
    expect(space.order).toBe(n);
    const matrix = space.matrix() as Float64Array;
    const flow = new ReducedFlow(matrix, n, 1);
    // dx/dt = A x by central differences of the picture's own curve.
    const at = (t: number): Float64Array => {
      const c = flow.at(t, 0).slice();
      return Float64Array.from({ length: n }, (_, i) => space.look(i).reduce((s, w, k) => s + w * c[k], 0));
    };
    const [before, now, after] = [0.5 - 1e-4, 0.5, 0.5 + 1e-4].map(at);
    for (let i = 0; i < n; i++) {
      let rate = 0;
      for (let e = rows.start[i]; e < rows.start[i + 1]; e++) rate += rows.value[e] * now[rows.column[e]];
      expect((after[i] - before[i]) / 2e-4).toBeCloseTo(rate, 6);
    }
    at(0).forEach((x, i) => {
      expect(x).toBeCloseTo(start[i], 12);
    });
  });
});
