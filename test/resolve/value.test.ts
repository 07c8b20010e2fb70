import { expect, test } from "vitest";
import { collector } from "../../src/problems/report.js";
import type { ScalarNode } from "../../src/read/tree.js";
import { resolveExpression, resolveUnit, resolveValue, type Scope, type Wanted } from "../../src/resolve/value.js";
import { dimensions } from "../../src/units/dimension.js";
import { one } from "../../src/units/unit.js";

const names = ["total", "tank", "speed", "feed.flow", "failed"];
const known = [dimensions.volume, dimensions.volume, dimensions.frequency, dimensions.flow, undefined];
const scope: Scope = {
  slot: (name) => (names.includes(name) ? names.indexOf(name) : undefined),
  dimension: (name) => known[names.indexOf(name)],
  names: () => names,
};
const env = [1, 0.25, 2, 0.001, Number.NaN];

/** A scalar as it stands in a file: `key: VALUE`, with VALUE in quotes or not. */
function scalar(written: string, text = written): ScalarNode {
  const plain = !/^["']/.test(written);
  const source = { path: "v3.yaml", text: `volume: ${written}\n` };
  const at = { source, from: 8, to: 8 + written.length };
  return { type: "scalar", at, text: plain ? text : text.slice(1, -1), plain, empty: written === "" };
}

function resolve(node: ScalarNode, wanted: Wanted = dimensions.volume, read = resolveValue) {
  const { report, problems } = collector();
  const value = read(node, wanted, scope, report);
  return {
    value,
    problems: problems.map((p) => ({
      code: p.code,
      at: p.at.source.text.slice(p.at.from, p.at.to),
      message: p.message,
      fix: p.fix,
    })),
  };
}

test("a value with names is compiled, with the unit it is written in and what it uses", () => {
  const { value, problems } = resolve(scalar("total - 2 * tank - 50 L ± 2 %"));
  expect(problems).toEqual([]);
  expect(value?.of(env)).toBeCloseTo(0.45, 15);
  expect(value?.unit?.name).toBe("L");
  expect(value?.uses).toEqual(["total", "tank"]);
  expect(value?.sd?.(env)).toBeCloseTo(0.009, 15);
});

test("the unit for printing has the dimension of the whole", () => {
  expect(resolve(scalar("0.5 min * feed.flow")).value?.unit).toBeUndefined();
  expect(resolve(scalar("35 degC - 20 degC"), "any").value?.unit).toBeUndefined();
  expect(resolve(scalar("35 degC + 2 K"), "any").value?.unit?.name).toBe("degC");
  expect(resolve(scalar("10 / 2"), "any").value?.unit).toBe(one);
  expect(resolve(scalar("1 - 10 %"), "any").value?.unit?.name).toBe("%");
  expect(resolve(scalar("total / tank"), "any").value?.unit).toBeUndefined();
});

test("a share or a flow: the dimension tells which", () => {
  const either = [dimensions.ratio, dimensions.flow];
  expect(resolve(scalar("30 %"), either).value?.of([])).toBe(0.3);
  expect(resolve(scalar("feed.flow / 2"), either).value?.dimension).toEqual(dimensions.flow);
  expect(resolve(scalar("3 L"), either).problems[0].code).toBe("wrong-dimension");
});

test.each<[string, string, string, string]>([
  ["10", "missing-unit", "10", "write the unit after the number: `10 L`"],
  ["0", "missing-unit", "0", "a zero needs its unit too: `0 L`"],
  ["-2.5", "missing-unit", "-2.5", "write the unit after the number: `-2.5 L`"],
  ["10 L/min", "wrong-dimension", "10 L/min", "write it like `150 L`"],
  ["totel - tank", "unknown-name", "totel", "did you mean `total`?"],
  ["total - tank-1", "unknown-name", "tank-1", "a minus has spaces around it: did you mean `tank - 1`?"],
  ["2 * total-tank", "unknown-name", "total-tank", "a minus has spaces around it: did you mean `total - tank`?"],
  [
    "10 L / h",
    "unknown-name",
    "h",
    "`h` is a unit: it stands after a number, and has no space inside, like `10 L/min`",
  ],
  ["10 l/Min", "unknown-unit", "Min", "did you mean `l/min`?"],
  [
    "total + speed",
    "unlike-terms",
    "total + speed",
    "make both the same kind of quantity, by their units or by multiplying or dividing",
  ],
  ["tank ± 20", "bad-uncertainty", "± 20", "write it in the unit of the value, or in %"],
  ["tank ± 3 min", "bad-uncertainty", "± 3 min", "write the spread in a unit of the value's kind, or in %"],
])("%s: %s at '%s'", (text, code, at, fix) =>
  expect(resolve(scalar(text)).problems).toMatchObject([{ code, at, fix }]),
);

test("the message names the dimension wanted and an example", () => {
  expect(resolve(scalar("10"), dimensions.flow).problems[0].message).toBe(
    "`10` has no unit; a flow (volume per time, like 10 L/min) is wanted",
  );
});

test("in quotes the place is still exact; with escapes it is the whole", () => {
  expect(resolve(scalar('"total - tonk"')).problems[0].at).toBe("tonk");
  const escaped: ScalarNode = { ...scalar('"total \\u002d tonk"'), text: "total - tonk" };
  expect(resolve(escaped).problems[0].at).toBe('"total \\u002d tonk"');
});

test("every unknown name is told; a name that failed elsewhere is not told again", () => {
  expect(resolve(scalar("max(a1, b1) + total")).problems.map((p) => p.at)).toEqual(["a1", "b1"]);
  expect(resolve(scalar("total + failed"))).toEqual({ value: undefined, problems: [] });
});

test("a rate law takes no ±", () => {
  expect(resolve(scalar("tank ± 2 %"), dimensions.volume, resolveExpression).problems[0].code).toBe("bad-expression");
  expect(resolve(scalar("2 * tank"), dimensions.volume, resolveExpression).value?.of(env)).toBe(0.5);
});

test("nothing, a list or a map where a value is wanted", () => {
  const { report, problems } = collector();
  expect(resolveValue(undefined, "any", scope, report)).toBeUndefined();
  expect(problems).toEqual([]);
  resolveValue({ type: "list", at: scalar("[1]").at, items: [] }, "any", scope, report);
  resolveValue(scalar(""), dimensions.flow, scope, report);
  expect(problems.map((p) => p.code)).toEqual(["wrong-shape", "wrong-shape"]);
});

test("a unit on its own, as beside a column", () => {
  const { report, problems } = collector();
  expect(resolveUnit(scalar("mS/cm"), "any", report)?.factor).toBeCloseTo(0.1, 15);
  expect(resolveUnit(scalar("min"), dimensions.time, report)?.factor).toBe(60);
  expect(problems).toEqual([]);
  expect(resolveUnit(scalar("lpm"), dimensions.flow, report)).toBeUndefined();
  expect(resolveUnit(scalar("L"), dimensions.time, report)).toBeUndefined();
  expect(problems.map((p) => [p.code, p.fix])).toEqual([
    ["unknown-unit", "did you mean `L/min`?"],
    ["wrong-dimension", "write it like `min`"],
  ]);
});
