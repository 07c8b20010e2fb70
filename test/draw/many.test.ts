import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { aggregated, mostBodies, outermost } from "../../src/draw/aggregate.js";
import { overlaps } from "../../src/draw/clutter.js";
import { flowSheet } from "../../src/draw/flow-sheet.js";
import { layOut } from "../../src/draw/layout.js";
import type { FlowSheet, SheetBody, SheetStream } from "../../src/draw/sheet.js";
import { parseNetwork } from "../../src/parse/network.js";
import type { Box } from "../../src/svg/svg.js";
import { exchange, feed, outlet, stirred, stream, tubular, units } from "./sheets.js";

/** Bodies and words that cover one another or lie outside of the drawing. */
function covered(sheet: FlowSheet): string[] {
  const layout = layOut(sheet);
  const all = [
    ...layout.bodies.map((p) => ({ is: p.body.name, box: p.box })),
    ...[...layout.captions, ...layout.labels.map((l) => l.caption)].map((c) => ({ is: c.lines[0].words, box: c.box })),
  ];
  const { bounds: b } = layout;
  const out = ({ x, y, width, height }: Box): boolean =>
    x < b.x - 0.01 || y < b.y - 0.01 || x + width > b.x + b.width + 0.01 || y + height > b.y + b.height + 0.01;
  return all.flatMap((one, k) => [
    ...(out(one.box) ? [`${one.is} outside`] : []),
    ...all.slice(k + 1).flatMap((two) => (overlaps(inner(one.box), inner(two.box)) ? [`${one.is} on ${two.is}`] : [])),
  ]);
}

const inner = (b: Box): Box => ({ x: b.x + 0.5, y: b.y + 0.5, width: b.width - 1, height: b.height - 1 });

const folders = [
  "networks/demo",
  "networks/flask",
  "networks/tour",
  "networks/reuse",
  "networks/washout",
  "networks/zoned",
  "shared/parts",
];
const shipped = folders.flatMap((folder) =>
  readdirSync(folder)
    .filter((f) => f.endsWith(".yaml"))
    .map((f) => join(folder, f)),
);

describe("every network that is shipped is laid out with nothing on anything", () => {
  const networks = shipped.flatMap((path) => {
    const { document } = parseNetwork(readFileSync(path, "utf8"), {
      path,
      read: (p) => readFileSync(p),
      allowOutside: true,
    });
    return document ? [[path, document] as const] : [];
  });
  test("there are some", () => expect(networks.length).toBeGreaterThan(20));
  test.each(networks)("%s", (_, network) => {
    const sheet = flowSheet(network.start);
    expect(covered(aggregated(sheet, outermost(network)))).toEqual([]);
  });
});

/** A long plant: bodies in a row, side branches, recycles and quiet zones. */
const long = (count: number, extra: readonly (readonly [number, number])[]): FlowSheet => {
  const bodies: SheetBody[] = [feed("feed")];
  const streams: SheetStream[] = [];
  for (let k = 0; k < count; k++) {
    bodies.push(k % 3 === 0 ? tubular(`b${k}`, 20 + (k % 7) * 10) : stirred(`b${k}`, 50 + (k % 5) * 40));
    streams.push(stream(k === 0 ? "feed" : `b${k - 1}`, `b${k}`, 10));
  }
  const taken = new Set(streams.map((s) => `${s.from}>${s.to}`));
  extra.forEach(([a, b], k) => {
    const [from, to] = [`b${a % count}`, `b${b % count}`];
    if (from === to || taken.has(`${from}>${to}`) || taken.has(`${to}>${from}`)) return;
    taken.add(`${from}>${to}`);
    streams.push(k % 4 === 0 ? exchange(from, to, 1) : stream(from, to, 2));
  });
  bodies.push(outlet("product"));
  streams.push(stream(`b${count - 1}`, "product", 10));
  return { title: "Long", bodies, streams, units };
};

const manyBodies = fc.tuple(
  fc.integer({ min: mostBodies + 1, max: 240 }),
  fc.array(fc.tuple(fc.nat(239), fc.nat(239)), { maxLength: 60 }),
);

describe("many bodies are drawn as few", () => {
  test("volume, feed and product stay; nothing covers anything", () => {
    fc.assert(
      fc.property(manyBodies, ([count, extra]) => {
        const sheet = long(count, extra);
        const few = aggregated(sheet, []);
        const volume = (s: FlowSheet): number => s.bodies.reduce((sum, b) => sum + b.volume, 0);
        expect(few.bodies.length).toBeLessThanOrEqual(mostBodies + 2);
        expect(volume(few)).toBeCloseTo(volume(sheet), 9);
        for (const end of ["feed", "product"]) {
          const through = (s: FlowSheet): number =>
            s.streams.filter((x) => x.from === end || x.to === end).reduce((sum, x) => sum + x.flow, 0);
          expect(through(few)).toBeCloseTo(through(sheet), 12);
        }
        expect(few.says).toContain(`${count} bodies drawn as`);
        expect(covered(few)).toEqual([]);
      }),
      { numRuns: 8 },
    );
  });

  test("parts come first, then rows, and what they hold is said", () => {
    const row = long(70, []);
    const names = row.bodies.filter((b) => b.role === "body").map((b) => b.name);
    const byParts = aggregated(row, [{ name: "front", members: names.slice(0, 40) }]);
    expect(byParts.bodies.find((b) => b.name === "front")).toMatchObject({ stands: 40, note: "40 bodies" });
    expect(byParts.bodies.length).toBe(33);
    const byRows = aggregated(row, []);
    expect(byRows.bodies.map((b) => b.name)).toEqual(["feed", "b0 to b69", "product"]);
  });

  test("few bodies stay as they are", () => {
    const sheet = long(mostBodies, [[3, 9]]);
    expect(aggregated(sheet, [])).toBe(sheet);
  });

  test("from 2 to 60 bodies nothing covers anything", () => {
    for (const count of [2, 8, 20, 40, 60])
      expect(
        covered(
          long(count, [
            [5, 1],
            [1, 7],
            [12, 30],
            [33, 20],
          ]),
        ),
      ).toEqual([]);
  });
});
