import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Plant } from "../../src/compile/plant.js";
import { parseNetwork } from "../../src/parse/network.js";
import { plantOf } from "../simulate/plants.js";

const network = (feed: string, compartments: readonly string[], outlets = "out", names: readonly string[] = []) =>
  [
    "network: A vessel",
    "format: 1",
    ...names,
    "feeds:",
    `  feed: ${feed}`,
    "compartments:",
    ...compartments.map((c) => `  ${c}`),
    `outlets: [${outlets}]`,
  ].join("\n");

/** Flows in L/min by `from -> to`. */
const flows = (plant: Plant): Record<string, number> =>
  Object.fromEntries(plant.streams.map((s) => [`${s.from} -> ${s.to}`, Math.round(s.flow * 6e4 * 1e9) / 1e9]));

describe("flows worked out by hand", () => {
  test("a recycle of R: R + 1 times the feed goes through", () => {
    for (const R of [0, 0.25, 1, 3, 1000]) {
      const plant = plantOf(
        network("{flow: 2 L/min, to: a}", [
          `a: {kind: stirred, volume: 8 L, to: {b: ${R} / (1 + ${R}), out: rest}}`,
          "b: {kind: tubular, volume: 1 L, to: a}",
        ]),
      );
      const through = plant.nodes[plant.entry.get("a") as number].inflow * 6e4;
      expect(Math.abs(through / (2 * (1 + R)) - 1)).toBeLessThan(1e-12 * (1 + R));
      expect(plant.outlets[0].flow * 6e4).toBeCloseTo(2, 10);
    }
  });

  test("a loop in a loop", () => {
    // b = 0.5 a + 0.2 b, a = 10 + 0.25 b  ->  a = 10 / (1 - 0.25 * 0.5 / 0.8) = 11.851851…, b = 0.625 a
    const plant = plantOf(
      network("{flow: 10 L/min, to: a}", [
        "a: {kind: stirred, volume: 5 L, to: {b: 50 %, out: rest}}",
        "b: {kind: stirred, volume: 5 L, to: {b: 20 %, a: 25 %, out: rest}}",
      ]),
    );
    const a = 10 / (1 - (0.25 * 0.5) / 0.8);
    expect(flows(plant)["feed -> a"]).toBe(10);
    expect(flows(plant)["a -> b"]).toBeCloseTo(0.5 * a, 8);
    expect(flows(plant)["b -> b"]).toBeCloseTo(0.2 * 0.625 * a, 8);
    expect(flows(plant)["b -> a"]).toBeCloseTo(0.25 * 0.625 * a, 8);
    expect(flows(plant)["b -> out"]).toBeCloseTo(0.55 * 0.625 * a, 8);
  });

  test("a pumped loop: the share is of what is left of it", () => {
    const plant = plantOf(
      network(
        "{flow: 10 L/min, to: {a: rest, out: 20 %}}",
        [
          "a: {kind: stirred, volume: 5 L, to: {loop: 4 L/min, side: 25 %, out: rest}}",
          "loop: {kind: tubular, volume: 5 L, to: a}",
        ],
        "out, side",
      ),
    );
    expect(flows(plant)).toEqual({
      "feed -> a": 8,
      "feed -> out": 2,
      "a -> loop": 4,
      "a -> side": 3,
      "a -> out": 5,
      "loop -> a": 4,
    });
  });

  test("two feeds that meet and part", () => {
    const text = network("{flow: 6 L/min, to: mix}\n  acid: {flow: feed.flow / 3, to: mix}", [
      "mix: {kind: junction, to: {a: 75 %, b: rest}}",
      "a: {kind: stirred, volume: 5 L, to: out}",
      "b: {kind: tubular, volume: 5 L, to: out}",
    ]);
    expect(flows(plantOf(text))).toMatchObject({ "mix -> a": 6, "mix -> b": 2, "a -> out": 6, "b -> out": 2 });
    expect(flows(plantOf(text, { "feed.flow": 12 / 6e4 }))).toMatchObject({ "acid -> mix": 4, "mix -> a": 12 });
  });
});

describe("at the edge", () => {
  test("a rest of exactly nothing", () => {
    for (const split of ["{a: 100 %, out: rest}", "{a: 30 %, b: 70 %, out: rest}", "{a: 1/3, b: 2/3, out: rest}"]) {
      const plant = plantOf(
        network(`{flow: 10 L/min, to: ${split}}`, [
          "a: {kind: stirred, volume: 5 L, to: out}",
          ...(split.includes("b:") ? ["b: {kind: stirred, volume: 5 L, to: out}"] : []),
        ]),
      );
      expect(plant.streams.find((s) => s.from === "feed" && s.to === "out")?.flow).toBe(0);
    }
  });

  test("a fixed flow that is all that arrives", () => {
    const text = (q: string) =>
      network("{flow: 10 L/min, to: a}", [`a: {kind: stirred, volume: 5 L, to: {side: ${q}, out: rest}}`], "out, side");
    const plant = plantOf(text("10 L/min"));
    expect(plant.streams.find((s) => s.to === "out")?.flow).toBe(0);
    expect(plantOf(text("0.6 m3/h")).streams.find((s) => s.to === "out")?.flow).toBe(0);
    expect(parseNetwork(text("10.000001 L/min")).problems.map((p) => p.code)).toEqual(["fixed-flow-too-large"]);
  });

  test("a recycle of a million million, and one without end", () => {
    const text = (share: string) =>
      network("{flow: 10 L/min, to: a}", [`a: {kind: stirred, volume: 5 L, to: {a: ${share}, out: rest}}`]);
    expect(plantOf(text("1 - 1e-12")).outlets[0].flow * 6e4).toBeCloseTo(10, 3);
    expect(parseNetwork(text("100 %")).problems.map((p) => p.code)).toEqual(["loop-unbounded"]);
  });

  test("a tube and a tank of no volume are points", () => {
    const plant = plantOf(
      network("{flow: 10 L/min, to: a}", [
        "a: {kind: stirred, volume: 0 L, to: b}",
        "b: {kind: tubular, volume: 0 L, to: out}",
      ]),
    );
    expect(plant.volume).toEqual({ total: 0, active: 0, dead: 0 });
  });

  test("a corner of exchange alone has no through-flow", () => {
    const plant = plantOf(
      network("{flow: 10 L/min, to: a}", [
        "a: {kind: stirred, volume: 5 L, to: out, exchange: {s: 2 L/min}}",
        "s: {kind: stirred, volume: 3 L}",
        "d: {kind: dead, volume: 2 L}",
      ]),
    );
    expect(plant.nodes[plant.entry.get("s") as number].inflow * 6e4).toBeCloseTo(2, 12);
    expect(plant.nodes[plant.entry.get("a") as number].inflow * 6e4).toBeCloseTo(12, 12);
    expect(plant.volume.total * 1000).toBeCloseTo(10, 12);
    expect(plant.volume.dead * 1000).toBeCloseTo(2, 12);
  });
});

describe("values that make no vessel", () => {
  const names = [
    "parameters:",
    "  v: {value: 5 L, between: [1 L, 9 L]}",
    "  x: {value: 30 %, between: [30 %, 60 %]}",
    "  y: {value: 30 %, between: [0 %, 40 %]}",
    "  q: {value: 1 L/min, between: [0 L/min, 2 L/min]}",
  ];
  const text = network(
    "{flow: 10 L/min, to: {a: x, b: y, out: rest}}",
    [
      "a: {kind: stirred, volume: v, to: {side: q, out: rest}, exchange: {s: q}}",
      "s: {kind: stirred, volume: 1 L}",
      "b: {kind: tubular, volume: 10 L - v, to: out}",
    ],
    "out, side",
    names,
  );
  const codes = (settings: Record<string, number>) => {
    const { document, problems } = parseNetwork(text);
    expect(problems).toEqual([]);
    return document && compile(document, settings).problems.map((p) => p.code);
  };

  test.each([
    [{}, []],
    [{ v: -0.001 }, ["negative-volume"]],
    [{ v: 0.011 }, ["negative-volume"]],
    [{ v: Number.NaN }, ["not-finite", "not-finite"]],
    [{ x: -0.1 }, ["share-range"]],
    [{ x: 0.8, y: 0.3 }, ["share-sum"]],
    [{ q: 5 / 6e4 }, ["fixed-flow-too-large"]],
    [{ q: -1 / 6e4 }, ["negative-flow", "negative-flow"]],
    [{ "feed.flow": 0 }, ["feed-zero"]],
    [{ "feed.flow": Number.POSITIVE_INFINITY }, ["not-finite"]],
  ] as [Record<string, number>, string[]][])("%j", (settings, expected) => {
    expect(codes(settings)).toEqual(expected);
  });

  test("shares without rest that no longer add up", () => {
    const { document } = parseNetwork(
      network("{flow: 10 L/min, to: {a: x, out: y}}", ["a: {kind: stirred, volume: 5 L, to: out}"], "out", [
        "parameters:",
        "  x: {value: 30 %}",
        "  y: {value: 70 %}",
      ]),
    );
    expect(document && compile(document, { x: 0.4 }).problems.map((p) => p.message)).toEqual([
      "shares out of 'feed' add to 110 %",
    ]);
  });
});
