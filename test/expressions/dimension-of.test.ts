import { expect, test } from "vitest";
import { dimensionOf } from "../../src/expressions/dimension-of.js";
import { isFault } from "../../src/expressions/fault.js";
import { parseExpression } from "../../src/expressions/parse.js";
import { type Dimension, type DimensionName, dimensionName, dimensions } from "../../src/units/dimension.js";

const known: Record<string, Dimension> = {
  V: dimensions.volume,
  Q: dimensions.flow,
  A: dimensions["molar concentration"],
  B: dimensions["molar concentration"],
  T: dimensions.temperature,
  E: dimensions["molar energy"],
  n: dimensions.ratio,
  k: [3, 0, -1, -1, 0, 0, 0],
};
const scope = { dimension: (name: string) => known[name] };

function of(text: string) {
  const e = parseExpression(text);
  if (isFault(e)) throw new Error(`${text}: ${JSON.stringify(e)}`);
  return dimensionOf(e, scope);
}

test.each<[string, DimensionName]>([
  ["V / Q", "time"],
  ["k * A * B", "reaction rate"],
  ["k * A^2", "reaction rate"],
  ["k * A^0.5 * B^(3/2)", "reaction rate"],
  ["exp(-E / (gas-constant * T))", "ratio"],
  ["exp(-E / gas-constant * (1 / T - 1 / 298.15 K))", "ratio"],
  ["max(V, 5 L, 2 * V)", "volume"],
  ["sqrt(V * V)", "volume"],
  ["V^(1/3)", "length"],
  ["step-up(T, 60 degC, 2 K) * Q", "flow"],
  ["n^n", "ratio"],
  ["abs(-Q)", "flow"],
  ["20 degC + 5 K", "temperature"],
  ["20 degC - 5 degC", "temperature"],
  ["15 % + 0.2", "ratio"],
])("%s is a %s", (text, name) => {
  const d = of(text);
  if (!d || isFault(d)) throw new Error(JSON.stringify(d));
  expect(dimensionName(d)).toBe(name);
});

test.each<[string, string, string]>([
  ["2 * (V + Q)", "unlike-terms", "(V + Q)"],
  ["V - 5", "unlike-terms", "V - 5"],
  ["max(V, Q)", "unlike-terms", "Q"],
  ["exp(V / Q)", "ratio-wanted", "V / Q"],
  ["1 + log(A)", "ratio-wanted", "A"],
  ["A^n", "bad-power", "n"],
  ["2^V", "bad-power", "V"],
  ["V^(0/0)", "bad-power", "(0/0)"],
])("%s: %s at '%s'", (text, code, at) => {
  const fault = of(text);
  if (!fault || !isFault(fault)) throw new Error("no fault");
  expect({ code: fault.code, at: text.slice(fault.from, fault.to) }).toEqual({ code, at });
});

test("a name without a dimension leaves the whole without one, and no fault", () => {
  expect(of("V + unknown")).toBeUndefined();
});
