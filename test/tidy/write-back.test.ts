import { describe, expect, test } from "vitest";
import { type NetworkDocument, parseNetwork } from "../../src/parse/network.js";
import { type NewValue, writeBack } from "../../src/tidy/write-back.js";

const text = `network: Vessel   # as built
format: 1
parameters:
  bypass:   {value: 10 %, between: [0 %, 60 %]}   # what slips by
  held:
    value: '200 L'   # in the corner
    between: [5 L, 480 L]
  renewal: {value: 1.5 L/min ± 0.5 L/min, between: [0.01 L/min, 50 L/min]}
  riser: {value: 0.1 * 1500 L, between: [1 L, 0.5 m3]}
feeds: {feed: {flow: 10 L/min, to: {leg: rest, product: bypass}}}
compartments:
  leg: {kind: tubular, volume: riser, to: bulk}
  bulk: {kind: stirred, volume: 600 L, to: product, exchange: {corner: renewal}}
  corner: {kind: stirred, volume: held}
outlets: [product]
`;

const network = (t: string): NetworkDocument => parseNetwork(t).document as NetworkDocument;
const put = (t: string, ...values: NewValue[]) => writeBack(network(t), values);
const litres = (x: number): number => x / 1000;

describe("values are put back", () => {
  test("into the digits alone: comments, quotes, units and spreads stay", () => {
    const { text: out, rewritten } = put(
      text,
      { name: "bypass", value: 0.081234, standardError: 0.0021 },
      { name: "held", value: litres(187.6543), standardError: litres(0.31) },
      { name: "renewal", value: litres(1.98765) / 60, standardError: litres(0.02) / 60 },
      { name: "riser", value: litres(140.123456), standardError: undefined },
    );
    expect(out).toBe(
      text
        .replace("value: 10 %", "value: 8.12 %")
        .replace("'200 L'", "'187.65 L'")
        .replace("1.5 L/min ± 0.5", "1.988 L/min ± 0.5")
        .replace("0.1 * 1500 L", "140.123 L"),
    );
    expect(rewritten).toContainEqual({ name: "held", before: "200 L", after: "187.65 L", line: 6 });
    expect(rewritten[3].before).toBe("0.1 * 1500 L");
  });

  test("and mean what was found, to the digits that the error supports", () => {
    const value = litres(187.6543);
    const { text: out } = put(text, { name: "held", value, standardError: litres(3.1) });
    const named = network(out as string).names.find((n) => n.name === "held");
    expect(Math.abs((named?.value.of([]) ?? 0) - value)).toBeLessThan(litres(0.05001));
    expect(out).toContain("'187.7 L'");
  });

  test("with more digits where the rounded number would leave its bounds", () => {
    const narrow = text.replace("[0 %, 60 %]", "[0 %, 59.95 %]");
    expect(put(narrow, { name: "bypass", value: 0.59946, standardError: 0.5 }).text).toContain("{value: 59.9 %,");
    expect(put(text, { name: "bypass", value: 0.59946, standardError: 0.5 }).text).toContain("{value: 60 %,");
    expect(put(text, { name: "bypass", value: 0.6, standardError: 0.05 }).text).toContain("{value: 60 %,");
    expect(put(text, { name: "bypass", value: 0, standardError: 0.05 }).text).toContain("{value: 0 %,");
  });

  test("twice is as good as once", () => {
    const value = { name: "held", value: litres(187.6543), standardError: litres(0.31) };
    const once = put(text, value).text as string;
    expect(put(once, value).text).toBe(once);
  });
});

describe("values are not put back", () => {
  test("where an anchor shares the place", () => {
    const shared = text.replace("value: 10 %, between: [0 %, 60 %]", "value: &x 10 %, between: [*x, 60 %]");
    const { text: out, problems } = put(shared, { name: "bypass", value: 0.2, standardError: undefined });
    expect(out).toBeUndefined();
    expect(problems.map((p) => [p.code, p.at.source.text.slice(p.at.from, p.at.to)])).toEqual([
      ["not-written-back", "10 %"],
    ]);
  });
  test("where there is no such parameter: all or nothing", () => {
    const { text: out, problems } = put(
      text,
      { name: "bypass", value: 0.2, standardError: undefined },
      { name: "nobody", value: 1, standardError: undefined },
    );
    expect(out).toBeUndefined();
    expect(problems[0].message).toContain("'nobody'");
  });
});
