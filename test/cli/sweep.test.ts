import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";

/** First order in one stirred tank: conversion is k tau / (1 + k tau). */
const files = {
  "tank.yaml": `network: Tank
format: 1
constants: {total: 1000 L}
parameters: {size: {value: 100 L, between: [10 L, 900 L]}}
requires: [size < total]
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: size, to: out}, still: {kind: dead, volume: total - size}}
outlets: [out]
`,
  "duty.yaml": `duty: Normal
format: 1
chemistry: decay.yaml
feeds: {feed: {A: 1 mol/L}}
report: [conversion of A, A at out]
`,
  "unsure.yaml": `duty: Unsure
format: 1
chemistry: decay.yaml
with: {k: 0.1 1/min ± 10 %}
feeds: {feed: {A: 1 mol/L}}
report: [conversion of A]
`,
  "decay.yaml": `chemistry: Decay
format: 1
species: {A: {}, P: {}}
constants: {k: 0.1 1/min}
reactions: [{makes: {A: -1, P: 1}, rate: k * A}]
`,
  // P is made and lost again: its concentration has a peak over the volume.
  "peak.yaml": `duty: Peak
format: 1
chemistry: series.yaml
feeds: {feed: {A: 1 mol/L}}
report: [P at out]
`,
  "series.yaml": `chemistry: Series
format: 1
species: {A: {}, P: {}}
constants: {k: 0.1 1/min}
reactions: [{makes: {A: -1, P: 1}, rate: k * A}, {makes: {P: -1}, rate: k * P}]
`,
};

const sweep = (duty: string, ...args: string[]) => json(["sweep", "tank.yaml", "--duty", duty, ...args], { files });

describe("sweep --over", () => {
  test("has no figures where a law that goes one way would run backwards, and says so", async () => {
    const own = { ...files, "decay.yaml": files["decay.yaml"].replace("makes: {A: -1, P: 1}", "equation: A -> P") };
    const args = ["sweep", "tank.yaml", "--duty", "duty.yaml", "--over", "k=-0.1 1/min..0.1 1/min:3"];
    const { document } = await json(args, { files: own });
    expect(document.points[0]).toMatchObject({
      figures: null,
      cannot: expect.stringContaining("'A -> P' would run backwards"),
    });
    expect(at(document, "points.2.figures.0.value")).toBeCloseTo(0.5, 10);
  });

  test("a point is what simulate gives there, and the closed form", async () => {
    const { status, document } = await sweep("duty.yaml", "--over", "size=100..400 L:4");
    expect(status).toBe(0);
    for (const [k, litres] of [100, 200, 300, 400].entries()) {
      const x = 0.1 * (litres / 10);
      expect(at(document, `points.${k}.at.0`)).toEqual({ value: expect.closeTo(litres, 9), unit: "L" });
      expect(at(document, `points.${k}.figures.0.value`)).toBeCloseTo(x / (1 + x), 10);
      const args = ["simulate", "tank.yaml", "--duty", "duty.yaml", "--set", `size=${litres} L`];
      const { document: one } = await json(args, { files });
      expect(at(document, `points.${k}.figures.1.value`)).toBe(at(one, "report.1.value"));
    }
    expect(at(document, "draws")).toBe(0);
    expect(at(document, "points.0.figures.0.interval95")).toBeNull();
  });

  test("every sort of input moves: constants of the chemistry, feeds, flows, and two at once", async () => {
    const { document } = await sweep(
      "duty.yaml",
      "--over",
      "k=0.1..0.4 1/min:2",
      "--over",
      "feed.flow=10..40 L/min:3 log",
    );
    const values = [...Array(6).keys()].map((i) => at(document, `points.${i}.figures.0.value`) as number);
    const expected = [0.1, 0.4].flatMap((k) => [10, 20, 40].map((q) => (100 * k) / q)).map((x) => x / (1 + x));
    values.forEach((v, i) => {
      expect(v).toBeCloseTo(expected[i], 9);
    });
    const fed = await sweep("duty.yaml", "--over", "feed.A=1..2 mol/L:2");
    expect(at(fed.document, "points.1.figures.1.value")).toBeCloseTo(1, 9);
  });

  test("what cannot be is said and left out", async () => {
    const { status, out } = await backmix(
      ["sweep", "tank.yaml", "--duty", "duty.yaml", "--over", "size=500..1500 L:3"],
      {
        files,
      },
    );
    expect(status).toBe(0);
    expect(out).toMatch(
      /left out: size 1000 L: `requires: size < total` does not hold\n {2}left out: size 1500 L: the volume of 'still'/,
    );
    const none = await sweep("duty.yaml", "--over", "size=1100..1500 L:3");
    expect(none.status).toBe(1);
    expect(at(none.document, "points.0.figures")).toBeNull();
  });

  test("intervals follow a declared ±; the same seed gives the same bytes; curves are written", async () => {
    const args = ["sweep", "tank.yaml", "--duty", "unsure.yaml", "--over", "size=100..200 L:2"];
    const first = await backmix([...args, "--json"], { files });
    expect((await backmix([...args, "--json"], { files })).out).toBe(first.out);
    const [low, high] = at(JSON.parse(first.out), "points.0.figures.0.interval95") as number[];
    // d ln(1 - X) = -X d ln k: 1.96 sd of 0.1 about X = 0.5.
    expect(high - low).toBeCloseTo(2 * 1.96 * 0.5 * 0.5 * 0.1, 2);
    const csv = await backmix([...args, "-o", "t.csv"], { files });
    expect(csv.written.get("t.csv")?.split("\n")[0]).toBe(
      "size [L],conversion of A [1],conversion of A [1] 2.5 %,conversion of A [1] 97.5 %,left out because",
    );
    const svg = await backmix([...args, "-o", "t.svg"], { files });
    expect(svg.written.get("t.svg")).toMatch(/^<svg .*<\/svg>\n$/s);
  });
});

describe("sweep --aim", () => {
  const solve = (duty: string, ...args: string[]) => sweep(duty, "--by", "size", ...args);

  test("the answer put back gives the aim", async () => {
    const { status, document } = await solve("duty.yaml", "--aim", "conversion of A = 80 %");
    expect(status).toBe(0);
    expect(at(document, "crossings.0.value")).toBeCloseTo(400, 6);
    expect(at(document, "crossings.0.figure.value")).toBeCloseTo(0.8, 10);
    expect(at(document, "by.from.value")).toBeCloseTo(10, 10);
  });

  test("an inequality says where it is met; <= looks down", async () => {
    const up = await solve("duty.yaml", "--aim", "conversion of A >= 80 %");
    expect(at(up.document, "met.0.from.value")).toBeCloseTo(400, 6);
    expect(at(up.document, "met.0.to.value")).toBeCloseTo(900, 6);
    const left = await solve("duty.yaml", "--aim", "A at out <= 0.2 mol/L");
    expect(at(left.document, "met.0.from.value")).toBeCloseTo(400, 6);
  });

  test("a peak is crossed twice, and both are told; one just under it is found; over it is infeasible", async () => {
    // P = x / (1 + x)2 with x = V/100 L: 0.2222 at x = 0.5 and 2, at most 0.25 at x = 1.
    const two = await solve("peak.yaml", "--aim", "P at out = 0.22222222222 mol/L");
    expect([0, 1].map((k) => at(two.document, `crossings.${k}.value`))).toEqual([
      expect.closeTo(50, 4),
      expect.closeTo(200, 4),
    ]);
    const near = await solve("peak.yaml", "--aim", "P at out >= 0.24999 mol/L");
    expect(near.status).toBe(0);
    const over = await solve("peak.yaml", "--aim", "P at out >= 0.26 mol/L");
    expect(over.status).toBe(1);
    expect(at(over.document, "reachable")).toBe(false);
    expect(at(over.document, "best.value")).toBeCloseTo(100, 1);
    expect(at(over.document, "best.figure.value")).toBeCloseTo(0.25, 8);
    const { out } = await backmix(
      ["sweep", "tank.yaml", "--duty", "peak.yaml", "--by", "size", "--aim", "P at out >= 0.26 mol/L"],
      { files },
    );
    expect(out).toMatch(/Infeasible: no size from 10 L to 900 L gives P at out ≥ 0.26 mol\/L; the nearest is/);
  });

  test("at a confidence that share of the draws meets it", async () => {
    const { document } = await solve("unsure.yaml", "--aim", "conversion of A = 80 %", "--confidence", "90 %");
    expect(at(document, "aim.sign")).toBe(">=");
    expect(at(document, "crossings.0.shareMeeting")).toBeCloseTo(0.9, 1.7);
    // k V / Q = 4 with k at its lower 10 %: 1.2816 sd.
    expect(at(document, "crossings.0.value") as number).toBeCloseTo(400 / (1 - 0.12816), -1);
    const middle = await solve("unsure.yaml", "--aim", "conversion of A = 80 %");
    expect(at(middle.document, "crossings.0.shareMeeting")).toBeCloseTo(0.5, 1);
  });
});

test.each([
  [["--over", "size"], /write it like/],
  [["--over", "sise=1..2 L"], /did you mean 'size'/],
  [["--over", "size=1..2 h"], /a volume .* is wanted/],
  [["--over", "size=2..1 L"], /the lower end comes first/],
  [["--over", "size=0..1 L log"], /above 0/],
  [["--over", "size=1..2 L", "--over", "size=1..2 L"], /two different inputs/],
  [["--over", "size=1..2 L", "--by", "size"], /goes with --aim/],
  [["--aim", "conversion A 95 %", "--by", "size"], /is no aim/],
  [["--aim", "conversion of A = 95 %"], /needs --by/],
  [["--aim", "conversion of A = 3 L", "--by", "size"], /a volume/],
  [["--aim", "conversion of A = 95 %", "--by", "k"], /say where to look: --between/],
  [["--aim", "conversion of A = 95 %", "--by", "size", "--confidence", "90 %"], /nothing is unsure/],
  [[], /say what to sweep/],
])("wrong usage is told: %j", async (args, told) => {
  const { status, err } = await backmix(["sweep", "tank.yaml", "--duty", "duty.yaml", ...args], { files });
  expect(status).toBe(2);
  expect(err).toMatch(told);
});
