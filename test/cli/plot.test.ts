import { describe, expect, test } from "vitest";
import { blockCurve } from "../../src/cli/text/plot.js";
import { backmix } from "./fake.js";

const unit = { xUnit: "min", yUnit: "g/L" };

describe("a curve in block characters", () => {
  test("a ramp rises from left to right, to the full height", () => {
    const x = Array.from({ length: 200 }, (_, k) => k);
    const [head, ...rest] = blockCurve({ label: "ramp", x, y: x, ...unit }).split("\n");
    expect(head).toBe("  ramp, largest 199 g/L");
    const rows = rest.slice(0, -1);
    const full = (column: number): number =>
      rows.reduce((sum, row) => sum + Math.max(0, " ▁▂▃▄▅▆▇█".indexOf(row[column] ?? " ")), 0);
    const heights = Array.from({ length: 64 }, (_, c) => full(c + 2));
    for (let c = 1; c < 64; c++) expect(heights[c]).toBeGreaterThanOrEqual(heights[c - 1]);
    expect(heights[63]).toBe(rows.length * 8);
    expect(rest.at(-1)).toMatch(/^ {2}0 +199 min$/);
  });

  test("keeps a peak of one point among thousands, bears few points, gaps and nothing", () => {
    const x = Array.from({ length: 5000 }, (_, k) => k);
    const y = x.map((k) => (k === 2500 ? 1 : 0));
    expect(blockCurve({ label: "p", x, y, ...unit })).toContain("█");
    expect(blockCurve({ label: "p", x: [0, 10], y: [0, 1], ...unit }).split("\n").length).toBe(9);
    expect(blockCurve({ label: "p", x: [0, 1, 2], y: [1, Number.NaN, -3], ...unit })).not.toMatch(/NaN|undefined/);
    for (const none of [[], [1], [0, 0], [-1, -2], [Number.NaN, Number.NaN]])
      expect(blockCurve({ label: "p", x: none.map((_, k) => k), y: none, ...unit })).toBe("");
  });

  test.each([
    ["simulate", ["simulate", "networks/demo/both.yaml", "--pulse", "feed"]],
    ["moments", ["moments", "networks/demo/salt-normal.yaml"]],
    ["fit", ["fit", "networks/tour/corner.yaml", "--trial", "networks/tour/salt.yaml"]],
  ])("%s draws one on a terminal, none in a pipe or as JSON", async (_, args) => {
    expect((await backmix(args, { colour: true })).out).toMatch(/[▁▂▃▄▅▆▇█]{5}/);
    expect((await backmix(args)).out).not.toMatch(/[▁▂▃▄▅▆▇█]/);
    expect((await backmix([...args, "--json"], { colour: true })).out).not.toMatch(/[▁▂▃▄▅▆▇█]/);
  });
});
