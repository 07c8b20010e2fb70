import { expect, test } from "vitest";
import { isFault } from "../../src/expressions/fault.js";
import { parseExpression } from "../../src/expressions/parse.js";
import { type Scale, scaleOf } from "../../src/expressions/scale.js";
import { type Dimension, dimensions } from "../../src/units/dimension.js";

const dimension: Record<string, Dimension> = {
  T0: dimensions.temperature,
  T1: dimensions.temperature,
  dT: dimensions.temperature,
  K: dimensions.temperature,
  n: dimensions.ratio,
  Q: dimensions.flow,
};
const scales: Record<string, Scale> = { T0: "point", T1: "point", dT: "step", K: "either" };
const scope = { dimension: (name: string) => dimension[name], scale: (name: string) => scales[name] };

function of(text: string) {
  const e = parseExpression(text);
  if (isFault(e)) throw new Error(`${text}: ${JSON.stringify(e)}`);
  return scaleOf(e, scope);
}

/** Points, differences and sums of an affine space: what is defined stays defined. */
test.each<[string, Scale]>([
  ["20 degC", "point"],
  ["-5 degC", "point"],
  ["20 degC + 5 K", "point"],
  ["5 K + 20 degC", "point"],
  ["20 degC + K", "point"],
  ["T0 + 5 K", "point"],
  ["T0 + dT", "point"],
  ["T0 - dT", "point"],
  ["T0 + (T1 - T0) / 2", "point"],
  ["(T1 - T0) + 20 degC", "point"],
  ["max(T0, 300 K)", "point"],
  ["T0 - 5 degC", "step"],
  ["20 degC - 5 degC", "step"],
  ["T1 - T0", "step"],
  ["n * dT", "step"],
  ["2 * 5 K", "step"],
  ["T0 - K", "either"],
  ["300 K", "either"],
  ["exp(1000 K / T0)", "either"],
  ["gas-constant * T0", "either"],
  ["Q * T0 / T1", "either"],
  ["step-up(T0, 60 degC, 2 K) * Q", "either"],
])("%s is a %s", (text, scale) => expect(of(text)).toBe(scale));

test.each<[string, string, string]>([
  ["T0 + 5 degC", "T0 + 5 degC", "write `5 K` where a difference is added"],
  ["K + 5 degC", "K + 5 degC", "write `5 K` where"],
  ["T0 + 9 degF", "T0 + 9 degF", "write `5 K` where"],
  ["20 degC + 30 degC", "20 degC + 30 degC", "write `30 K`"],
  ["T0 + T1", "T0 + T1", "add a difference"],
  ["2 * T0", "2 * T0", "multiply a difference"],
  ["1 L/min * (T0 / 2)", "(T0 / 2)", "multiply a difference"],
  ["n * 20 degC", "20 degC", "write a difference in K"],
  ["4.18 kJ/L/K * 20 degC", "20 degC", "write a difference in K"],
  ["exp(1 - 20 degC / 300 K)", "20 degC", "write a difference in K"],
  ["dT - 5 degC", "dT - 5 degC", "write a difference in K"],
  ["-T0", "-T0", "write a difference in K"],
])("%s is refused at '%s'", (text, at, fix) => {
  const fault = of(text);
  if (typeof fault === "string") throw new Error(`taken for a ${fault}`);
  expect(text.slice(fault.from, fault.to)).toBe(at);
  expect(fault.code).toBe("temperature-scale");
  expect((fault.data as { fix: string }).fix).toContain(fix);
});

test.each(["-300 degC", "-460 degF", "T0 + -274 °C"])("%s lies below absolute zero", (text) =>
  expect(parseExpression(text)).toMatchObject({ code: "bad-number", data: { why: "lies below absolute zero" } }),
);
