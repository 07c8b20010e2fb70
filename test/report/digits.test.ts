import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { atDecimals, chance, estimateLine, estimateWords } from "../../src/report/digits.js";

const line = (value: number | undefined, low?: number, high?: number, unit = "L"): string =>
  estimateLine({ value, unit, low, high }).replaceAll("\u2009", " ");

describe("a number carries as many digits as its interval supports", () => {
  test.each([
    [82.3123, 80.1234, 84.2345, "82.3 L (80.1 to 84.2)"],
    [82.3123, 78.1234, 86.2345, "82 L (78 to 86)"],
    [1234.5, 934, 1534, "1200 L (900 to 1500)"],
    [1234.5, 1004, 1464, "1230 L (1000 to 1460)"],
    [0.012345, 0.0121, 0.0126, "0.01235 L (0.01210 to 0.01260)"],
    [-3.456, -5.1, -1.9, "\u22123.5 L (\u22125.1 to \u22121.9)"],
    [0.0000012345, 0.0000010345, 0.0000014345, "1.23×10⁻⁶ L (1.03×10⁻⁶ to 1.43×10⁻⁶)"],
    [99.97, 99.2, 100.8, "100.0 L (99.2 to 100.8)"],
  ])("%d between %d and %d", (value, low, high, words) => {
    expect(line(value, low, high)).toBe(words);
  });

  test("without an interval it says so, and gives no more than three digits", () => {
    expect(line(1.23456)).toBe("1.23 L");
    expect(line(1.23456, Number.NaN, Number.NaN)).toBe("1.23 L (not estimable)");
    expect(line(undefined)).toBe("not estimable");
    expect(line(Number.NaN)).toBe("not estimable");
    expect(line(2, 2, 2)).toBe("2 L");
  });

  test("what is printed lies within a sixth of the half-width of the value", () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1e5, max: 1e5, noNaN: true }),
        fc.double({ min: 1e-3, max: 1e4, noNaN: true }),
        (v, half) => {
          const printed = Number(
            estimateWords({ value: v, unit: "", low: v - half, high: v + half }).value.replace("\u2212", "-"),
          );
          // one digit of a half-width of 3 to 10, two of 1 to 3: half a unit of the last digit is at most a sixth
          expect(Math.abs(printed - v)).toBeLessThanOrEqual(half / 5.8);
        },
      ),
    );
  });
});

test("minus nothing is nothing", () => {
  expect(atDecimals(-0.004, 2)).toBe("0.00");
  expect(atDecimals(-0.006, 2)).toBe("\u22120.01");
});

test("probabilities claim no certainty", () => {
  expect([0.5, 0.9999, 0.0001, 0.881, Number.NaN].map((p) => chance(p).replace("\u2009", " "))).toEqual([
    "50 %",
    "above 99 %",
    "below 1 %",
    "88 %",
    "unknown",
  ]);
});
