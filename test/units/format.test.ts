import fc from "fast-check";
import { expect, test } from "vitest";
import { constantOf } from "../../src/expressions/compile.js";
import { isFault } from "../../src/expressions/fault.js";
import { parseValue } from "../../src/expressions/parse.js";
import { describeDimension, exampleFor, siUnit } from "../../src/units/describe.js";
import { type Dimension, dimensionKey, dimensions, sameDimension, times, toPower } from "../../src/units/dimension.js";
import { formatNumber, formatQuantity } from "../../src/units/format.js";
import { isUnitFault, parseUnit } from "../../src/units/parse.js";
import { symbols } from "../../src/units/table.js";
import { inUnit, one, type Unit } from "../../src/units/unit.js";

test.each<[number, number, string]>([
  [0, 4, "0"],
  [1234.5678, 4, "1235"],
  [0.1 + 0.2, 12, "0.3"],
  [-2.5, 3, "−2.5"],
  [1.23456e-5, 3, "1.23e-5"],
  [0.00012, 3, "0.00012"],
  [12345678, 3, "1.23e7"],
  [-0, 3, "0"],
  [Number.POSITIVE_INFINITY, 3, "infinite"],
  [Number.NaN, 3, "undefined"],
])("%d with %d digits is %s", (x, digits, text) => expect(formatNumber(x, digits)).toBe(text));

test("a bare number has no unit beside it", () => expect(formatQuantity(0.25, one)).toBe("0.25"));

const anyUnit: fc.Arbitrary<Unit> = fc
  .tuple(fc.constantFrom(...symbols.keys()), fc.constantFrom("", "2", "^0.5"), fc.constantFrom("", "/min", "/(m2 K)"))
  .map(([name, power, per]) => parseUnit(name + power + per))
  .filter((u): u is Unit => !isUnitFault(u));

test("what is printed reads back", () =>
  fc.assert(
    fc.property(anyUnit, fc.double({ noNaN: true, noDefaultInfinity: true, min: -1e12, max: 1e12 }), (unit, x) => {
      const si = x * unit.factor + unit.offset;
      const text = formatQuantity(si, unit, 15);
      const read = parseValue(text);
      if (isFault(read)) throw new Error(`${text}: ${JSON.stringify(read)}`);
      const back = constantOf(read.expression) ?? Number.NaN;
      expect(Math.abs(back - si)).toBeLessThanOrEqual(1e-14 * Math.max(Math.abs(si), Math.abs(unit.offset)));
      expect(formatQuantity(back, unit, 12)).toBe(formatQuantity(si, unit, 12));
    }),
  ));

test("print, parse, print is the identity on short numbers", () =>
  fc.assert(
    fc.property(anyUnit, fc.integer({ min: -99999, max: 99999 }), fc.integer({ min: 0, max: 4 }), (unit, n, places) => {
      const text = formatQuantity((n / 10 ** places) * unit.factor + unit.offset, unit, 6);
      const read = parseValue(text);
      if (isFault(read)) throw new Error(text);
      expect(formatQuantity(constantOf(read.expression) ?? Number.NaN, unit, 6)).toBe(text);
    }),
  ));

test("every named dimension is described by an example that has it", () => {
  for (const d of Object.values(dimensions)) {
    const read = parseValue(exampleFor(d));
    if (isFault(read) || read.expression.type !== "number") throw new Error(exampleFor(d));
    expect(sameDimension(read.expression.unit.dimension, d)).toBe(true);
    expect(describeDimension(d)).toContain(exampleFor(d));
  }
  expect(describeDimension(dimensions.flow)).toBe("a flow (volume per time, like 10 L/min)");
});

test("the SI unit of any dimension reads back as that dimension, with factor 1", () => {
  const exponent = fc.constantFrom(-2, -1, -0.5, 0, 0, 1, 1.5, 3);
  fc.assert(
    fc.property(fc.tuple(exponent, exponent, exponent, exponent, exponent, exponent, exponent), (d) => {
      const dimension: Dimension = d;
      const text = siUnit(dimension);
      if (text === "") return;
      const unit = parseUnit(text);
      if (isUnitFault(unit)) throw new Error(text);
      expect(dimensionKey(unit.dimension)).toBe(dimensionKey(dimension));
      expect(inUnit(1, unit)).toBe(1);
    }),
  );
});

test("a third of a power, three times, is the whole", () => {
  const third = toPower(dimensions.volume, 1 / 3);
  expect(dimensionKey(times(times(third, third), third))).toBe(dimensionKey(dimensions.volume));
});
