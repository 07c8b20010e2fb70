import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { flowSheet } from "../../src/draw/flow-sheet.js";
import { folded } from "../../src/draw/fold.js";
import { layOut } from "../../src/draw/layout.js";
import { drawNetwork } from "../../src/draw/network.js";
import { inRows } from "../../src/draw/rows.js";
import type { FlowSheet } from "../../src/draw/sheet.js";
import { parseNetwork } from "../../src/parse/network.js";
import { samples } from "../../src/svg/spine.js";
import { feed, outlet, sheets, stirred, stream, units } from "./sheets.js";

const chain = (count: number): FlowSheet => {
  const names = Array.from({ length: count }, (_, k) => `tank-${k + 1}`);
  const way = ["in", ...names, "out"];
  return {
    title: "A long row",
    bodies: [feed("in"), ...names.map((n) => stirred(n, 100)), outlet("out")],
    streams: [
      ...way.slice(1).map((to, k) => stream(way[k], to, 10)),
      stream(names[count - 1], names[0], 3, "3 L/min", "recycle"),
    ],
    units,
  };
};

describe("a drawing that is too long for a page is folded", () => {
  const layout = layOut(chain(14));
  const { x, width } = layout.bounds;
  const strip = {
    bounds: layout.bounds,
    whole: [...layout.bodies.map((b) => b.box), ...layout.captions.map((c) => c.box)],
    ribbons: layout.ribbons.map(({ spine, trip }) => ({ spine, width: trip.width })),
  };
  const rows = folded(strip, 500);

  test("rows follow one another without a gap, none much longer than asked", () => {
    expect(rows.length).toBe(Math.ceil(width / 500));
    expect(rows[0].from).toBe(x);
    expect(rows.at(-1)?.to).toBeCloseTo(x + width, 9);
    for (const [k, row] of rows.entries()) {
      if (k > 0) expect(row.from).toBe(rows[k - 1].to);
      expect(row.to - row.from).toBeLessThan(1.5 * 500);
    }
  });

  test("no body and no word is cut, and what is cut is lettered alike on both sides", () => {
    for (const { to, leave } of rows.slice(0, -1)) {
      expect(strip.whole.filter((b) => b.x < to && b.x + b.width > to)).toEqual([]);
      const passing = layout.ribbons.filter((r) => {
        const xs = samples(r.spine, 2).map((p) => p.x);
        return Math.min(...xs) < to && Math.max(...xs) > to;
      });
      expect(leave.length).toBe(passing.length);
    }
    for (const [k, row] of rows.entries()) expect(row.enter).toEqual(k === 0 ? [] : rows[k - 1].leave);
    const letters = rows.flatMap((r) => r.leave.map((c) => c.letter));
    expect(new Set(letters).size).toBe(letters.length);
  });

  test("each body is drawn once, at its full size", () => {
    const svg = drawNetwork(chain(14), { theme: "light" });
    expect(svg).toContain("drawn in");
    for (let k = 1; k <= 14; k++) expect(svg.split(`>tank-${k}<`).length - 1).toBe(1);
    expect(Number(/ width="([\d.]+)"/.exec(svg)?.[1])).toBeLessThan(950);
  });
});

test("a drawing that a page holds stays in one piece", () => {
  const layout = layOut(sheets.v3);
  expect(inRows(layout)).toMatchObject({ bounds: layout.bounds, says: "" });
});

test("the widest network that is shipped is printed with type of at least 7 pt on A4", () => {
  const path = "networks/reuse/train.yaml";
  const { document } = parseNetwork(readFileSync(path, "utf8"), {
    path,
    read: (p) => readFileSync(p),
    allowOutside: true,
  });
  const width = Number(/ width="([\d.]+)"/.exec(drawNetwork(flowSheet(document!.start)))?.[1]);
  const [page, type] = [186, 11]; // mm between margins; px of the smallest words, at 96 px an inch
  expect(((page / 25.4) * 72 * type) / width).toBeGreaterThan(7);
});
