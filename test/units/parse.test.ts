import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type DimensionName, dimensions, sameDimension } from "../../src/units/dimension.js";
import { isUnitFault, parseUnit } from "../../src/units/parse.js";
import { symbols } from "../../src/units/table.js";
import { fromUnit, inUnit, type Unit } from "../../src/units/unit.js";

function unit(text: string): Unit {
  const u = parseUnit(text);
  if (isUnitFault(u)) throw new Error(`${text}: ${JSON.stringify(u)}`);
  return u;
}

/** NIST Special Publication 811 (2008), Appendix B.8: exact (bold) factors unless digits are given. */
test.each<[number, string, number, DimensionName]>([
  [1, "ft", 0.3048, "length"],
  [1, "in", 0.0254, "length"],
  [1, "ft3", 0.028316846592, "volume"],
  [1, "in3", 1.6387064e-5, "volume"],
  [1, "gal", 3.785411784e-3, "volume"],
  [1, "qt", 9.46352946e-4, "volume"],
  [1, "pt", 4.73176473e-4, "volume"],
  [1, "floz", 2.95735295625e-5, "volume"],
  [128, "floz", 3.785411784e-3, "volume"],
  [1, "impgal", 4.54609e-3, "volume"],
  [1, "galUK", 4.54609e-3, "volume"],
  [231, "in3", 3.785411784e-3, "volume"],
  [42, "gal", 0.158987294928, "volume"],
  [1, "lb", 0.45359237, "mass"],
  [1, "atm", 101325, "pressure"],
  [1, "bar", 1e5, "pressure"],
  [1, "gpm", 3.785411784e-3 / 60, "flow"],
  [1, "MGD", 3785.411784 / 86400, "flow"],
  [1, "L", 1e-3, "volume"],
  [1, "t", 1000, "mass"],
  [1, "h", 3600, "time"],
  [1, "d", 86400, "time"],
  [1, "cal", 4.184, "energy"],
  [1, "kWh", 3.6e6, "energy"],
  [1, "mCi", 3.7e7, "frequency"],
  [1, "lb/ft3", 0.45359237 / 0.028316846592, "mass concentration"],
])("%d %s in SI", (x, text, si, name) => {
  const u = unit(text);
  expect(sameDimension(u.dimension, dimensions[name])).toBe(true);
  expect(Math.abs(fromUnit(x, u) / si - 1)).toBeLessThan(4e-16);
});

test("degrees Celsius and Fahrenheit meet at the fixed points of NIST SP 811", () => {
  expect(fromUnit(0, unit("degC"))).toBe(273.15);
  expect(fromUnit(212, unit("degF"))).toBeCloseTo(373.15, 12);
  expect(fromUnit(-40, unit("°F"))).toBeCloseTo(fromUnit(-40, unit("°C")), 12);
  expect(inUnit(273.15, unit("degF"))).toBeCloseTo(32, 12);
});

test.each<[string, string]>([
  ["W/(m2 K)", "W/m2/K"],
  ["W/(m^2·K)", "W/m2/K"],
  ["m³/h", "m3/h"],
  ["µg/L", "ug/L"],
  ["μg/L", "ug/L"],
  ["s^-1", "1/s"],
  ["s⁻¹", "1/s"],
  ["mol/(L s)", "mol/L/s"],
  ["ml/min", "mL/min"],
  ["(mol/L)^0.5", "mol^0.5/L^0.5"],
  ["kg·m/s^2", "N"],
  ["rpm", "1/min"],
])("%s is %s", (a, b) => {
  const [x, y] = [unit(a), unit(b)];
  expect(x.dimension).toEqual(y.dimension);
  expect(x.factor / y.factor).toBeCloseTo(1, 14);
});

test("min is a minute, not a milli-inch; mol is no metre", () => {
  expect(unit("min").factor).toBe(60);
  expect(unit("mol").dimension).toEqual(dimensions.amount);
});

describe("faults", () => {
  test.each<[string, string | undefined]>([
    ["l/Min", "l/min"],
    ["lpm", "L/min"],
    ["LPM", "L/min"],
    ["Kg/M3", "kg/m3"],
    ["hr", "h"],
    ["mol/litre", "mol/L"],
    ["M", "mol/L"],
    ["C", "degC"],
    ["hours", "h"],
    ["gallons/day", "gal/d"],
    ["imp", "impgal"],
    ["fl", "floz"],
    ["widget", undefined],
    ["x", undefined],
  ])("%s is asked back as %s", (text, meant) => {
    const fault = parseUnit(text);
    if (!isUnitFault(fault)) throw new Error("taken silently");
    expect(fault.fault).toBe("unknown");
    expect(fault.nearest).toBe(meant);
  });

  test.each(["", "L/", "/min", "10", "L//min", "L min", "(L", "L)", "%%", "m^", "m^x", "2 L", "m2 K"])(
    "'%s' is malformed",
    (text) => expect(parseUnit(text)).toMatchObject({ fault: "malformed" }),
  );

  test.each(["W/m2/degC", "1/degC", "degC^2", "J/(kg °C)", "(degC)", "degC/min"])(
    "%s holds a point on a scale where a difference is meant",
    (text) => expect(parseUnit(text)).toMatchObject({ fault: "offset" }),
  );

  test("the place is that of the part", () => {
    expect(parseUnit("mol/Foo/min")).toMatchObject({ part: "Foo", from: 4, to: 7 });
    expect(parseUnit("degC/min")).toMatchObject({ part: "degC", from: 0, to: 4 });
  });

  test("any text is a unit or a fault, never a throw", () =>
    fc.assert(
      fc.property(fc.string({ unit: fc.constantFrom(..."Lmin/()^*·% 10µ°.-³") }), (text) => {
        const u = parseUnit(text);
        if (!isUnitFault(u)) expect(Number.isFinite(u.factor)).toBe(true);
      }),
    ));
});

test("products and quotients of units multiply and divide, and their dimensions add", () => {
  const simple = fc.constantFrom(...[...symbols].filter(([, s]) => s.offset === 0).map(([name]) => name));
  fc.assert(
    fc.property(simple, simple, (a, b) => {
      const [x, y, over, product] = [unit(a), unit(b), unit(`${a}/${b}`), unit(`${a}·${b}`)];
      expect(Math.abs(over.factor / (x.factor / y.factor) - 1)).toBeLessThan(1e-15);
      expect(Math.abs(product.factor / (x.factor * y.factor) - 1)).toBeLessThan(1e-15);
      over.dimension.forEach((d, i) => {
        expect(d).toBe(x.dimension[i] - y.dimension[i] + 0);
      });
    }),
  );
});
