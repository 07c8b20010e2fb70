import { readdirSync, readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { aggregated, outermost } from "../../src/draw/aggregate.js";
import { flowSheet } from "../../src/draw/flow-sheet.js";
import { layOut } from "../../src/draw/layout.js";
import type { FlowSheet } from "../../src/draw/sheet.js";
import { type Lane, untangle } from "../../src/draw/untangle.js";
import { parseNetwork } from "../../src/parse/network.js";
import { type Point, samples } from "../../src/svg/spine.js";

interface Case {
  readonly columns: readonly (readonly string[])[];
  readonly steps: readonly { readonly from: string; readonly to: string }[];
  readonly lanes: readonly Lane[];
}

/** Crossings counted by geometry: columns at x = 0, 1, ...; a lane's upright pieces at a third of a column beside its ends. */
function crossings({ columns, steps, lanes }: Case): number {
  const at = new Map(columns.flatMap((ids, x) => ids.map((id, y) => [id, { x, y }] as const)));
  const place = (id: string): Point => at.get(id)!;
  // level up to 0.4, then across, level again: as the drawing does it
  const onward = steps.map(({ from, to }) => {
    const [a, b] = [place(from), place(to)];
    return [a, { x: a.x + 0.4, y: a.y }, { x: b.x - 0.4, y: b.y }, b];
  });
  const uprights = lanes.flatMap(({ from, to, side }) => {
    const far = side === "under" ? 1e3 : -1e3;
    const [a, b] = [place(from), place(to)];
    return [
      [
        { x: a.x + 0.3, y: a.y + 1e-3 * Math.sign(far) },
        { x: a.x + 0.3, y: far },
      ],
      [
        { x: b.x - 0.3, y: b.y + 1e-3 * Math.sign(far) },
        { x: b.x - 0.3, y: far },
      ],
    ];
  });
  let count = 0;
  for (let i = 0; i < onward.length; i++) {
    for (let j = 0; j < i; j++) if (cross(onward[i], onward[j])) count++;
    for (const u of uprights) if (cross(onward[i], u)) count++;
  }
  return count;
}

/** Do two lines cross properly (touching ends do not count)? */
function cross(one: readonly Point[], two: readonly Point[]): boolean {
  const turn = (a: Point, b: Point, c: Point): number => (b.x - a.x) * (c.y - a.y) - (b.y - a.y) * (c.x - a.x);
  for (let i = 1; i < one.length; i++) {
    for (let j = 1; j < two.length; j++) {
      const [a, b, c, d] = [one[i - 1], one[i], two[j - 1], two[j]];
      if (turn(a, b, c) * turn(a, b, d) < 0 && turn(c, d, a) * turn(c, d, b) < 0) return true;
    }
  }
  return false;
}

const random: fc.Arbitrary<Case> = fc
  .array(fc.integer({ min: 1, max: 5 }), { minLength: 2, maxLength: 5 })
  .chain((sizes) => {
    const columns = sizes.map((size, c) => Array.from({ length: size }, (_, k) => `${c}.${k}`));
    const pair = fc
      .integer({ min: 0, max: sizes.length - 2 })
      .chain((c) => fc.record({ from: fc.constantFrom(...columns[c]), to: fc.constantFrom(...columns[c + 1]) }));
    const column = fc.constantFrom(...columns.flat());
    const lane = fc.record({ from: column, to: column, side: fc.constantFrom("over" as const, "under" as const) });
    return fc.record({
      columns: fc.constant(columns),
      steps: fc.uniqueArray(pair, { selector: (s) => `${s.from}>${s.to}`, maxLength: 12 }),
      lanes: fc.array(lane, { maxLength: 3 }),
    });
  });

describe("an order with fewer crossings", () => {
  test("never has more of them, counted by geometry, and loses nothing", () => {
    fc.assert(
      fc.property(random, (c) => {
        const columns = c.columns.map((ids) => [...ids]);
        untangle(columns, c.steps, c.lanes);
        expect(crossings({ ...c, columns })).toBeLessThanOrEqual(crossings(c));
        expect(columns.map((ids) => [...ids].sort())).toEqual(c.columns.map((ids) => [...ids].sort()));
      }),
    );
  });

  test("sees what a stream that runs back under all would cross", () => {
    const columns = [["a"], ["back", "on"], ["out"]];
    const steps = [
      { from: "a", to: "back" },
      { from: "a", to: "on" },
      { from: "on", to: "out" },
    ];
    untangle(columns, steps, [{ from: "back", to: "a", side: "under" }]);
    expect(columns[1]).toEqual(["on", "back"]);
    untangle(columns, steps, [{ from: "back", to: "a", side: "over" }]);
    expect(columns[1]).toEqual(["back", "on"]);
  });
});

/** Streams whose middle lines cross in a drawing: pairs of names. */
function drawnCrossings(sheet: FlowSheet): string[] {
  const lines = layOut(sheet).ribbons.map((r) => ({ is: `${r.from}>${r.to}`, points: samples(r.spine, 3) }));
  return lines.flatMap((one, k) =>
    lines.slice(k + 1).flatMap((two) => (cross(one.points, two.points) ? [`${one.is} x ${two.is}`] : [])),
  );
}

/** Two bypasses, one beginning under the other and ending beyond it: both run over the top, so that they cross once. */
const overlapping = ["feed>mixer.bulk x bed.2.tank>product"];

describe("in every network that is shipped no two streams cross that need not", () => {
  const folders = ["networks/demo", "networks/tour", "networks/reuse", "networks/washout", "shared/parts"];
  const networks = folders.flatMap((folder) =>
    readdirSync(folder)
      .filter((f) => f.endsWith(".yaml"))
      .flatMap((f) => {
        const path = `${folder}/${f}`;
        const read = (p: string): Uint8Array => readFileSync(p);
        const { document } = parseNetwork(readFileSync(path, "utf8"), { path, read, allowOutside: true });
        return document ? [[path, document] as const] : [];
      }),
  );
  test.each(networks)("%s", (path, network) => {
    const found = drawnCrossings(aggregated(flowSheet(network.start), outermost(network)));
    expect(found).toEqual(path.endsWith("train.yaml") ? overlapping : []);
  });
});
