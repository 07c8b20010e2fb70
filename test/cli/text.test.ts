import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { curvesCsv } from "../../src/cli/csv.js";
import { pure, quantity } from "../../src/cli/json/quantity.js";
import { digitsFor } from "../../src/cli/text/digits.js";
import { lackOfFitText } from "../../src/cli/text/fit.js";
import { pairs, table, wrap } from "../../src/cli/text/table.js";
import { clockFrom } from "../../src/cli/times.js";
import { parseUnit } from "../../src/units/parse.js";
import type { Unit } from "../../src/units/unit.js";

const unit = (text: string): Unit => parseUnit(text) as Unit;

describe("tables", () => {
  test("columns line up, numbers to the right", () => {
    const text = table(
      [{ title: "name" }, { title: "n", align: "right" }],
      [
        ["a", "1"],
        ["longer", "100"],
      ],
    );
    expect(text).toBe("  name      n\n  a         1\n  longer  100");
  });
  test("pairs line up", () =>
    expect(
      pairs([
        ["a", "1"],
        ["bcd", "2"],
      ]),
    ).toBe("  a    1\n  bcd  2"));
  test("wrapped text keeps its words and its width", () => {
    const words = fc.array(fc.stringMatching(/^[a-z]{1,12}$/), { minLength: 1, maxLength: 60 });
    fc.assert(
      fc.property(words, (list) => {
        const lines = wrap("  1. ", list.join(" "), 40).split("\n");
        expect(lines.every((l) => l.length <= 40)).toBe(true);
        expect(lines.join(" ").replace("1.", "").split(/ +/).filter(Boolean)).toEqual(list);
      }),
    );
  });
});

test("a lack of fit that repeats are too far apart to show speaks for no network", () => {
  const text = (f: number, p: number, unlike?: string[]): string => {
    const lackOfFit = {
      readings: 120,
      moments: 60,
      pure: { sum: 1, freedom: 60 },
      lack: { sum: 1, freedom: 59 },
      f,
      p,
      correlation: 0,
    };
    return lackOfFitText({ lackOfFit, ...(unlike ? { unlike } : {}) });
  };
  expect(text(0.00674, 1)).toMatch(/differ by far more than the network misses.*does not speak for the network/);
  expect(text(0.9, 0.6)).not.toMatch(/speak/);
  expect(text(1.1, 0.4, ["a", "b"])).toMatch(/are no repeats \('a', 'b'\)$/);
});

describe("numbers", () => {
  test("a quantity reads back to the same double, or says why there is none", () => {
    fc.assert(
      fc.property(fc.double(), (x) => {
        const { value, why } = JSON.parse(JSON.stringify(pure(x)));
        if (Number.isFinite(x)) expect(value).toBe(x + 0);
        else expect([value, why]).toEqual([null, Number.isNaN(x) ? "undefined" : "infinite"]);
      }),
    );
    expect(quantity(undefined, unit("min"), "not-estimable")).toEqual({
      value: null,
      unit: "min",
      why: "not-estimable",
    });
  });
  test("digits end with the error's second", () => {
    expect(digitsFor(123.456, 1.2)).toBe(4);
    expect(digitsFor(0.012, 0.5)).toBe(2);
    expect(digitsFor(5, undefined)).toBe(4);
  });
  test("times come out as typed", () => {
    const { shown, si, unit: of } = clockFrom({ times: "0.1, 1e1,0.3 h" }, unit("min"), () => 1);
    expect(shown).toEqual([0.1, 0.3, 10]);
    expect([...si]).toEqual([0.1, 0.3, 10].map((t) => t * 3600));
    expect(of.name).toBe("h");
  });
  test("a grid ends where it is told", () => {
    const { shown } = clockFrom({ until: "0.7 h", points: 8 }, unit("min"), () => 1);
    expect([shown[0], shown[7], shown.length]).toEqual([0, 0.7, 8]);
    expect(clockFrom({}, unit("min"), () => 600).shown.at(-1)).toBe(10);
  });
});

test("cells of CSV that need quotes have them", () => {
  const curve = { at: 'a "b", c', time: [0], value: [Number.NaN], spikes: [] };
  const csv = curvesCsv([curve], { time: "min", value: "g/L", spike: "g/L min" });
  expect(csv.split("\n")[1]).toBe('"a ""b"", c",0,,,');
});
