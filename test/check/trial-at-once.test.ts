import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { parseAny } from "../../src/parse/any.js";
import { parseStudy } from "../../src/parse/study.js";
import { codes } from "../resolve/parts.js";

const vessel = `network: Vessel
format: 1
constants: {speed: 60 1/min, held: 2 L, turn: 1 1/min}
feeds: {feed: {flow: 1 L/min, to: tank}, side: {flow: 1 L/min, to: tank}, wash: {flow: 1 L/min, to: tank}}
compartments:
  tank: {kind: stirred, volume: 3 L * speed * turn / (60 1/min^2), to: tube}
  tube: {kind: tubular, volume: held, to: parted}
  parted: {kind: junction, to: {product: 50 %, waste: rest}, sends: {solids: {product: 10 %, waste: rest}}}
outlets: [product, waste]
`;

/** A sound trial in which every slip below finds its own place. */
const sound = `trial: Trial
format: 1
vessel: vessel.yaml
flows:
  feed: {file: flow.csv, time: {column: t, unit: min}, value: {column: Q, unit: L/min}}
  side: 1 L/min
  wash: 2 L/min
with: {speed: 50 1/min, held: 3 L, turn: 2 1/min}
injection:
  - {at: feed, pulse: 5 g}
  - {at: tank, pulse: 6 g, lasting: 2 min}
  - {at: tube, pulse: 7 g}
tracer: {half-life: 4 h, follows: solids, retained: {tube: 2, tank: 3}}
readings:
  - {at: product, file: salt.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}
  - {at: waste, file: salt.csv, time: {column: t, unit: min}, value: {column: d, unit: g/L}, noise: {relative: 1 %}}
  - {at: {tank: 40 %, tube: rest}, file: salt.csv, time: {column: t, unit: min}, value: {column: e, unit: g/L}}
`;

const slips: readonly (readonly [written: string, instead: string, told: string])[] = [
  ["flow.csv, time: {column: t", "flow.csv, time: {column: tt", "column-missing t.yaml tt"],
  ["column: Q, unit: L/min", "column: Q, unit: kg/min", "wrong-dimension t.yaml feed"],
  ["side: 1 L/min", "sied: 1 L/min", "unknown-place t.yaml 1 L/min"],
  ["wash: 2 L/min", "wash: -2 L/min", "below-zero t.yaml -2 L/min"],
  ["speed: 50 1/min", "sped: 50 1/min", "unknown-place t.yaml 50 1/min"],
  ["held: 3 L", "held: 3 g", "wrong-dimension t.yaml 3 g"],
  ["turn: 2 1/min", "turn: 2 1/mn", "unknown-unit t.yaml mn"],
  ["at: feed, pulse: 5 g", "at: feeed, pulse: 5 g", "unknown-place t.yaml feeed"],
  ["pulse: 6 g", "pulse: -6 g", "below-zero t.yaml -6 g"],
  ["lasting: 2 min", "lasting: -2 min", "below-zero t.yaml -2 min"],
  ["at: tube, pulse", "at: tub, pulse", "unknown-place t.yaml tub"],
  ["pulse: 7 g", "pulse: 7 mol", "amount-mismatch t.yaml 7 mol"],
  ["half-life: 4 h", "half-life: -4 h", "below-zero t.yaml -4 h"],
  ["follows: solids", "follows: solid", "follows-unknown t.yaml solid"],
  ["tube: 2,", "tubes: 2,", "unknown-place t.yaml tubes"],
  ["tank: 3}", "tank: -3}", "below-zero t.yaml -3"],
  ["at: product", "at: prodct", "unknown-place t.yaml prodct"],
  ["column: c", "column: cc", "column-missing t.yaml cc"],
  ["at: waste", "at: wast", "unknown-place t.yaml wast"],
  ["relative: 1 %", "relative: -1 %", "below-zero t.yaml -1 %"],
  ["tank: 40 %", "tnk: 40 %", "unknown-place t.yaml tnk"],
  ["tube: rest", "tube: 70 %", "mix-sum t.yaml {tank: 40 %, tube: 70 %}"],
  ["format: 1\n", "format: 1\nnots: x\n", "unknown-key t.yaml nots"],
];
const last = slips.findIndex(([, , what]) => what.startsWith("mix-sum"));
const renamed = slips.findIndex(([, , what]) => what.endsWith("tnk"));

const files: Record<string, string> = {
  "vessel.yaml": vessel,
  "flow.csv": "t,Q\n0,1\n5,2\n10,1\n",
  "salt.csv": "t,c,d,e\n0,0,0,0\n1,1,1,1\n2,2,1,2\n4,1,0.5,1\n9,0.1,0.1,0.1\n",
};

const slipped = (chosen: readonly number[]): string =>
  chosen.reduce((text, i) => {
    expect(text).toContain(slips[i][0]);
    return text.replace(slips[i][0], slips[i][1]);
  }, sound);

const told = (chosen: readonly number[]): string[] =>
  codes(parseAny(slipped(chosen), { path: "t.yaml", read: (path) => files[path] }).problems).sort();

describe("all that is wrong with a trial and its vessel is told at once", () => {
  test("nothing is wrong to begin with", () => expect(told([])).toEqual([]));

  test.each(slips.map(([, instead, expected], i) => [instead, expected, i] as const))("%s", (_, expected, i) => {
    expect(told([i])).toEqual([expected]);
  });

  test("no slip hides another, and none is told twice", () => {
    const places = slips.map((_, i) => i).filter((i) => i !== last);
    const some = fc.uniqueArray(fc.constantFrom(...places), { minLength: 2, maxLength: 12 });
    fc.assert(
      fc.property(some, (chosen) => {
        expect(told(chosen)).toEqual(chosen.map((i) => slips[i][2]).sort());
      }),
      { numRuns: 60, seed: 20261201 },
    );
    const all = slips.map((_, i) => i).filter((i) => i !== renamed);
    expect(told(all)).toEqual(all.map((i) => slips[i][2]).sort());
  });

  test("in a study, too", () => {
    const study = "study: S\nformat: 1\nrivals: [vessel.yaml]\ntrials: [t.yaml]\n";
    const both = { ...files, "t.yaml": slipped([0, 4]) };
    const read = (path: string): string | undefined => both[path as keyof typeof both];
    expect(codes(parseStudy(study, { path: "s.yaml", read }).problems).sort()).toEqual([slips[0][2], slips[4][2]]);
  });
});
