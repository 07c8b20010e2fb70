import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { codes, parse } from "../resolve/parts.js";

/** A sound network in which every slip below finds its own place. */
const sound = `network: Vessel
format: 1
constants:
  whole: 1000 L
  least: 2 L/min
parameters:
  share: {value: 20 %, between: [10 %, 60 %]}
  held: {value: 30 L, between: [1 L, 400 L]}
  turns: {value: 2, between: [1, 3]}
requires: [least < 9 L/min]
feeds:
  feed: {flow: 10 L/min, to: {bulk: share, tube: rest}}
  side: {flow: 2 L/min, to: bulk}
compartments:
  bulk: {kind: stirred, volume: whole - held, to: {tube: 60 %, spread: 40 %}, exchange: {corner: least}}
  corner: {kind: stirred, volume: held}
  tube: {kind: tubular, volume: 20 L, to: loop}
  spread: {kind: dispersed, volume: 10 L, peclet: 4, ends: open, to: product}
  loop: {kind: stirred, volume: 5 L, to: {back: turns * 4 L/min, parted: rest}}
  back: {kind: tubular, volume: 3 L, to: loop}
  row: {kind: stirred, volume: 6 L, repeat: 3, to: row-end}
  row-end: {kind: part, use: part.yaml, with: {size: 4 L}, to: product}
  third: {kind: junction, to: row}
  parted:
    kind: junction
    to: {product: 90 %, row: rest}
    sends: {solids: {product: 30 %, row: 70 %}, fines: {product: 20 %, row: rest}, salts: {product: 10 %, row: 90 %}}
outlets: [product]
checks:
  - {volume: corner, equals: 30 L}
  - {flow: spread, equals: 1.6 L/min, within: 50 %}
`.replace(
  "feed: {flow: 10 L/min, to: {bulk: share, tube: rest}}",
  "feed: {flow: 10 L/min, to: {bulk: share, third: 5 %, tube: rest}}",
);

const part = `network: Part
format: 1
constants: {size: 2 L, kept: 1 L}
feeds: {in: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: size + kept, to: out}}
outlets: [out]
`;

/** What is written in place of what, and what must be told of it. */
const slips: readonly (readonly [written: string, instead: string, told: string])[] = [
  ["whole - held", "whol - held", "unknown-name main.yaml whol"],
  ["between: [10 %, 60 %]", "between: [60 %, 10 %]", "bounds-reversed main.yaml 60 %"],
  ["between: [1, 3]", "between: [3, 9]", "start-outside-bounds main.yaml 2"],
  ["[least < 9 L/min]", "[least < 1 L/min]", "requirement-broken main.yaml least < 1 L/min"],
  ["side: {flow: 2 L/min", "side: {flow: 2 L", "wrong-dimension main.yaml 2 L"],
  ["spread: 40 %", "spread: 50 %", "share-sum main.yaml {tube: 60 %, spread: 50 %}"],
  ["volume: 20 L, to: loop", "volume: 20 L - 30 L, to: loop", "negative-volume main.yaml 20 L - 30 L"],
  ["peclet: 4", "peclet: 0", "out-of-range main.yaml 0"],
  ["ends: open", "ends: shut", "wrong-choice main.yaml shut"],
  ["back: {kind: tubular, volume: 3 L", "back: {kind: tubular, volume: 3 1/L", "wrong-dimension main.yaml 3 1/L"],
  ["row: {kind: stirred, volume: 6 L", "row: {kind: stirrd, volume: 6 L", "wrong-choice main.yaml stirrd"],
  ["with: {size: 4 L}", "with: {sise: 4 L}", "unknown-binding main.yaml sise"],
  ["row: 70 %", "row: 75 %", "sends-sum main.yaml solids"],
  ["product: 20 %", "product: 120 %", "sends-range main.yaml 120 %"],
  ["product: 10 %", "prodct: 10 %", "sends-where main.yaml prodct"],
  ["third: {kind: junction, to: row}", "third: {kind: junction, to: rows}", "unknown-place main.yaml rows"],
  ["{volume: corner", "{volume: cornr", "unknown-place main.yaml cornr"],
  ["equals: 1.6 L/min", "equals: 1.6 L", "wrong-dimension main.yaml 1.6 L"],
  ["  least: 2 L/min", "  least: 2 L/min\n  spare: 7 L", "unused-name main.yaml spare"],
  ["held: {value: 30 L,", "held: {value: 30 L, abuot: x,", "unknown-key main.yaml abuot"],
  ["corner: {kind: stirred, volume: held}", "corner: {kind: stirred}", "missing-key main.yaml corner"],
];

const told = (chosen: readonly number[]): string[] => {
  const main = chosen.reduce((text, i) => {
    expect(text).toContain(slips[i][0]);
    return text.replace(slips[i][0], slips[i][1]);
  }, sound);
  return codes(parse({ "main.yaml": main, "part.yaml": part }).problems).sort();
};

describe("all that is wrong is told at once", () => {
  test("nothing is wrong to begin with", () => {
    expect(told([])).toEqual([]);
  });

  test.each(slips.map(([, instead, expected], i) => [instead, expected, i] as const))("%s", (_, expected, i) => {
    expect(told([i])).toEqual([expected]);
  });

  test("no slip hides another, and none is told twice", () => {
    const some = fc.uniqueArray(fc.nat(slips.length - 1), { minLength: 2, maxLength: 12 });
    fc.assert(
      fc.property(some, (chosen) => {
        expect(told(chosen)).toEqual(chosen.map((i) => slips[i][2]).sort());
      }),
      { numRuns: 60, seed: 20261201 },
    );
  });

  test("ten and more in one file", () => {
    const all = slips.map((_, i) => i);
    expect(told(all)).toEqual(slips.map(([, , expected]) => expected).sort());
  });
});
