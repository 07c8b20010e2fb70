import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import { parseNetwork } from "../../src/parse/network.js";
import { meanAges, meanLives } from "../../src/simulate/ages.js";
import { moments } from "../../src/simulate/moments.js";
import { tracerResponse } from "../../src/simulate/tracer.js";

const folder = new URL("../../networks/zoned/", import.meta.url);
const lattice = { volumes: tableOf("volumes.csv"), flows: tableOf("flows.csv") };

/** Rows of a table, its header left out. */
function tableOf(file: string): string[][] {
  const lines = readFileSync(new URL(file, folder), "utf8").trim().split("\n");
  return lines.slice(1).map((line) => line.split(","));
}

interface Tables {
  readonly volumes: readonly (readonly (string | number)[])[];
  readonly flows: readonly (readonly (string | number)[])[];
}

interface Around {
  readonly feeds?: string;
  readonly compartments?: string;
  readonly to?: string;
  readonly keys?: string;
  readonly follow?: boolean;
  readonly outlets?: string;
}

/** A zoned vessel: cells and flows from tables, and what stands around them. */
function parse({ volumes, flows }: Tables, around: Around) {
  const files: Record<string, string> = {
    "v.csv": ["id,v", ...volumes.map((r) => r.join(","))].join("\n"),
    "f.csv": ["from,to,q", ...flows.map((r) => r.join(","))].join("\n"),
  };
  const text = `network: Zones
format: 1
feeds:
${around.feeds ?? "  feed: {flow: 25 L/min, to: core}"}
compartments:
  core:
    kind: zones
    volumes: {file: v.csv, id: {column: id}, volume: {column: v, unit: L}}
    flows: {file: f.csv, from: {column: from}, to: {column: to}, flow: {column: q, unit: L/min}${around.follow ? ", follow: inflow" : ""}}
    to: ${around.to ?? "product"}
${around.keys ?? ""}
${around.compartments ?? ""}
outlets: ${around.outlets ?? "[product]"}
`;
  return parseNetwork(text, { path: "z.yaml", read: (path) => files[path] });
}

function plantOf(tables: Tables, around: Around = {}): Plant {
  const { document, problems } = parse(tables, around);
  if (!document) throw new Error(problems.map((p) => p.message).join("; "));
  return document.start;
}

const sumOf = (rows: Tables["volumes"]): number => rows.reduce((sum, r) => sum + Number(r[1]), 0);

/** Tracer from a feed at an outlet. */
const at = (plant: Plant, outlet = 0, feed = 0) => moments(plant, plant.feeds[feed].node)[plant.outlets[outlet].node];

describe("the lattice of 125 cells", () => {
  const plant = plantOf(lattice);

  test("mean = V/Q", () => {
    expect(plant.volume.total / (sumOf(lattice.volumes) / 1000) - 1).toBeCloseTo(0, 14);
    expect(at(plant).share).toBeCloseTo(1, 13);
    expect((at(plant).mean * 25) / (60 * sumOf(lattice.volumes)) - 1).toBeCloseTo(0, 12);
  });

  test("the order of rows changes nothing", () => {
    const shuffled = <T>(rows: readonly T[]) =>
      fc.shuffledSubarray([...rows], { minLength: rows.length, maxLength: rows.length });
    fc.assert(
      fc.property(shuffled(lattice.volumes), shuffled(lattice.flows), (volumes, flows) => {
        const other = plantOf({ volumes, flows });
        for (const k of ["mean", "variance", "skewness"] as const)
          expect((at(other)[k] as number) / (at(plant)[k] as number) - 1).toBeCloseTo(0, 11);
        for (const cell of ["core.c0", "core.c77"]) {
          const age = (p: Plant) => meanAges(p)[p.exit.get(cell) as number];
          expect(age(other) / age(plant) - 1).toBeCloseTo(0, 11);
        }
      }),
      { numRuns: 10 },
    );
  });

  test("written by hand as stirred tanks it is the same vessel", () => {
    const hand = byHand(lattice, 25);
    const [a, b] = [at(plant), at(hand)];
    expect(a.mean / b.mean - 1).toBeCloseTo(0, 12);
    expect(a.variance / b.variance - 1).toBeCloseTo(0, 10);
    expect(hand.nodes.filter((n) => n.volume > 0).length).toBe(125);
    const times = Float64Array.from({ length: 40 }, (_, i) => 20 * i);
    const curve = (p: Plant) => tracerResponse(p, { at: "feed", form: "pulse" }, times).readings[0].value;
    const peak = Math.max(...curve(hand));
    curve(plant).forEach((e, i) => {
      expect(Math.abs(e - curve(hand)[i])).toBeLessThan(1e-10 * peak);
    });
  });

  test("age and life expectancy of a cell: volume-weighted, both have one mean", () => {
    const { size, volume } = plant.columns;
    const weighted = (times: Float64Array) => times.reduce((sum, t, i) => sum + (volume[i] > 0 ? volume[i] * t : 0), 0);
    expect(size).toBe(129);
    const [ages, lives] = [meanAges(plant), meanLives(plant)];
    expect(weighted(ages) / weighted(lives) - 1).toBeCloseTo(0, 11);
    expect(lives[plant.feeds[0].node] / ages[plant.outlets[0].node] - 1).toBeCloseTo(0, 12);
  });

  test("cells can be spoken of by name", () => {
    const cell = plant.exit.get("core.c62") as number;
    expect(plant.columns.nameOf(cell)).toBe("core.c62");
    expect(plant.nodes[cell].volume).toBe(plant.columns.volume[cell]);
    expect(plant.exit.has("core.c125")).toBe(false);
    expect(tracerResponse(plant, { at: "feed", form: "pulse" }, [0, 60], { at: ["core.c62"] }).readings[1].at).toBe(
      "core.c62",
    );
  });
});

/** A zoned table as stirred tanks: every flow a share of what leaves its cell. */
function byHand({ volumes, flows }: Tables, inlet: number): Plant {
  const leaves = new Map<string, number>();
  for (const [from, , q] of flows) leaves.set(String(from), (leaves.get(String(from)) ?? 0) + Number(q));
  const to = (from: string): string => {
    const own = flows.filter((r) => r[0] === from);
    const share = ([, target, q]: readonly (string | number)[], i: number): string =>
      `${target === "out" ? "product" : target}: ${i === own.length - 1 ? "rest" : Number(q) / (leaves.get(from) as number)}`;
    return own.length === 1 && own[0][1] === "out" ? "product" : `{${own.map(share).join(", ")}}`;
  };
  const text = `network: By hand
format: 1
feeds:
  feed: {flow: ${inlet} L/min, to: ${to("feed")}}
compartments:
${volumes.map(([id, v]) => `  ${id}: {kind: stirred, volume: ${v} L, to: ${to(String(id))}}`).join("\n")}
outlets: [product]
`;
  const { document, problems } = parseNetwork(text);
  if (!document) throw new Error(problems.map((p) => p.message).join("; "));
  return document.start;
}

const three: Tables = {
  volumes: [
    ["a", 100],
    ["b", 200],
    ["c", 0],
    ["d", 50],
  ],
  flows: [
    ["feed", "a", 8],
    ["side", "b", 2],
    ["a", "b", 5],
    ["b", "a", 1],
    ["a", "c", 4],
    ["c", "out", 3],
    ["c", "d", 1],
    ["b", "d", 6],
    ["d", "out", 4],
    ["d", "top", 3],
  ],
};
const twoFeeds = "  feed: {flow: 8 L/min, to: core.feed}\n  extra: {flow: 2 L/min, to: core.side}";

describe("several inlets and outlets", () => {
  const around = { feeds: twoFeeds, to: "{out: product, top: vent}", outlets: "[product, vent]" };

  test("share-weighted, the outlets' means are volume over flow", () => {
    const plant = plantOf(three, around);
    const mean = plant.outlets.reduce((sum, o) => sum + (o.flow / (10 / 6e4)) * meanAges(plant)[o.node], 0);
    expect(mean / (35 * 60) - 1).toBeCloseTo(0, 12);
    expect(plant.outlets.map((o) => Number((o.flow * 6e4).toFixed(12)))).toEqual([7, 3]);
  });

  test("the table follows the inflow, and only in proportion", () => {
    const feeds = twoFeeds.replace("8 L", "80 L").replace("2 L", "20 L");
    expect(at(plantOf(three, { ...around, feeds, follow: true })).mean * 10).toBeCloseTo(
      at(plantOf(three, around)).mean,
      8,
    );
    expect(parse(three, { ...around, feeds }).problems.map((p) => p.code)).toEqual(["zone-inflow", "zone-inflow"]);
    const odd = feeds.replace("80 L", "85 L");
    expect(parse(three, { ...around, feeds: odd, follow: true }).problems.map((p) => p.code)).toContain("zone-inflow");
  });

  test("inlets that miss the table by less than its tolerance: flows are brought to what the streams bring", () => {
    const feeds = twoFeeds.replace("8 L", "8.001 L");
    const plant = plantOf(three, { ...around, feeds, keys: "    tolerance: 0.1 %" });
    const mean = plant.outlets.reduce((sum, o) => sum + (o.flow / (10.001 / 6e4)) * meanAges(plant)[o.node], 0);
    expect(mean / ((350 * 60) / 10.001) - 1).toBeCloseTo(0, 12);
  });

  test("a stream may go round through a zoned body", () => {
    const plant = plantOf(three, {
      feeds: twoFeeds.replace("8 L/min, to: core.feed", "5 L/min, to: mixer"),
      to: "{out: product, top: mixer}",
      compartments: "  mixer: {kind: junction, to: core.feed}",
    });
    expect(at(plant).mean).toBeGreaterThan(0);
    const mean = meanAges(plant)[plant.outlets[0].node];
    expect(mean / (50 * 60) - 1).toBeCloseTo(0, 12);
    expect(plant.streams.find((s) => s.role === "recycle")).toBeDefined();
  });
});

test("a table rounded to three digits is reconciled and keeps V/Q to the last digit", () => {
  const rounded = { ...lattice, flows: lattice.flows.map(([a, b, q]) => [a, b, Number(q).toPrecision(3)]) };
  expect(parse(rounded, {}).problems.map((p) => p.code)).toEqual(["zone-unbalanced"]);
  const { document, problems } = parse(rounded, { keys: "    tolerance: 1 %" });
  expect(problems.map((p) => [p.code, p.severity])).toEqual([["zone-reconciled", "warning"]]);
  const plant = document?.start as Plant;
  expect((at(plant).mean * 25) / (60 * sumOf(lattice.volumes)) - 1).toBeCloseTo(0, 12);
  expect(at(plant).variance / at(plantOf(lattice)).variance).toBeCloseTo(1, 3);
});

test("still cells are dead volume, also such as feed one another", () => {
  const still: Tables = {
    volumes: [...three.volumes, ["x", 7], ["y", 5], ["z", 3]],
    flows: [...three.flows, ["x", "y", 4], ["y", "x", 4]],
  };
  const around = { feeds: twoFeeds, to: "{out: product, top: product}" };
  const { document, problems } = parse(still, around);
  expect(problems.map((p) => p.code)).toEqual(["zone-still"]);
  const plant = document?.start as Plant;
  expect(plant.volume.dead * 1e3).toBeCloseTo(15, 12);
  expect(meanAges(plant)[plant.outlets[0].node] / (35 * 60) - 1).toBeCloseTo(0, 12);
  expect(meanAges(plant)[plant.exit.get("core.x") as number]).toBeNaN();
});

test("other values scale the same plant", () => {
  const { document } = parse(lattice, { follow: true });
  const { plant } = compile(document as NonNullable<typeof document>, { "feed.flow": 50 / 6e4 });
  expect(at(plant as Plant).mean / at(plantOf(lattice)).mean).toBeCloseTo(0.5, 12);
});
