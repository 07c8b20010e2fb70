import fc from "fast-check";
import { expect, test } from "vitest";
import { settle } from "../../src/numerics/mixed-rows.js";
import { RowsByWidth } from "../../src/numerics/rows-by-width.js";
import { sparseRows } from "../../src/numerics/sparse.js";
import { roomFor, Workspace } from "../../src/numerics/wasm/workspace.js";

const number = fc.double({ min: -10, max: 10, noNaN: true });
/** Rows of any width, empty ones and ones wider than have a loop of their own; the last few hold nothing. */
const systems = fc.integer({ min: 1, max: 40 }).chain((size) =>
  fc.record({
    states: fc.integer({ min: 1, max: size }),
    rows: fc.array(fc.dictionary(fc.integer({ min: 0, max: size - 1 }).map(String), number, { maxKeys: 15 }), {
      minLength: size,
      maxLength: size,
    }),
    now: fc.array(number, { minLength: size, maxLength: size }),
    before: fc.array(number, { minLength: size, maxLength: size }),
  }),
);

test("compiled loops over rows of any width do what the formula says", () => {
  fc.assert(
    fc.property(systems, number, number, ({ states, rows: given, now, before }, forward, back) => {
      const size = given.length;
      const maps = given.map(
        (row, i) =>
          // An unknown that holds nothing is made of those before it.
          new Map(Object.entries(row).flatMap(([j, v]) => (i < states || Number(j) < i ? [[Number(j), v]] : []))),
      );
      const rows = { ...sparseRows(maps), states };
      const workspace = new Workspace(RowsByWidth.room(rows) + roomFor({ floats: [size, size, states] }));
      const wide = new RowsByWidth(rows, workspace, (value, diagonal) => 2 * value + (diagonal ? 1 : 0));
      const { place } = wide;
      expect([...place].sort((a, b) => a - b)).toEqual(now.map((_, i) => i));
      const [x, y, volume] = [workspace.floats(size), workspace.floats(size), workspace.floats(states)];
      now.forEach((v, i) => {
        x[place[i]] = v;
        y[place[i]] = before[i];
        if (i < states) volume[place[i]] = i + 1;
      });
      wide.settle(x);
      const plain = Float64Array.from(now);
      settle(rows, plain);
      const total = wide.step(x, y, forward, back, volume);
      let [sum, size1] = [0, 0];
      for (let i = 0; i < size; i++) expect(x[place[i]]).toBeCloseTo(plain[i], 9);
      for (let i = 0; i < states; i++) {
        let [row, bound] = [0, 0];
        for (const [j, v] of maps[i]) {
          row += (2 * v + (j === i ? 1 : 0)) * plain[j];
          bound += Math.abs((2 * v + 1) * plain[j]);
        }
        const wanted = forward * row - back * before[i];
        expect(Math.abs(y[place[i]] - wanted)).toBeLessThanOrEqual(1e-14 * (Math.abs(forward) * bound + 100) * 16);
        sum += (i + 1) * plain[i];
        size1 += (i + 1) * Math.abs(plain[i]);
      }
      expect(Math.abs(total - sum)).toBeLessThanOrEqual(1e-14 * size1);
    }),
    { numRuns: 200 },
  );
});
