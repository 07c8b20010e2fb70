import { describe, expect, test } from "vitest";
import { evaluateNames } from "../../src/compile/evaluate.js";
import { printProblems } from "../../src/problems/print.js";
import { type NewValue, writeBack } from "../../src/tidy/write-back.js";
import { type Library, network, networkOf } from "../resolve/parts.js";

const tank = network(`constants: {total: 100 L}
parameters:
  bypass: {value: 10 %, between: [0 %, 60 %]}
  still: {value: 20 L, between: [1 L, 50 L]}
feeds: {feed: {flow: 10 L/min, to: {tank: rest, out: bypass}}}
compartments:
  tank: {kind: stirred, volume: total - still, to: out, exchange: {corner: 1 L/min}}
  corner: {kind: stirred, volume: still}
outlets: [out]`);

const found: NewValue[] = [
  { name: "bypass", value: 0.0812, standardError: 0.001 },
  { name: "still", value: 0.0234, standardError: 0.0001 },
];

/** The file with the values; read again it must hold them, and the shared files must be as they were. */
function written(library: Library, values: readonly NewValue[]): string {
  const { text, problems } = writeBack(networkOf(library), values);
  expect(printProblems(problems)).toBe("");
  const after = networkOf({ ...library, "main.yaml": text ?? "" });
  const env = evaluateNames(after);
  for (const { name, value } of values) {
    expect(env[after.names.find((n) => n.name === name)?.slot ?? -1] / value).toBeCloseTo(1, 3);
  }
  return text ?? "";
}

describe("a variant: into its change", () => {
  const main = (change: string) => ({
    "tank.yaml": tank,
    "main.yaml": `network: Variant # mine\nformat: 1\nbased-on: tank.yaml\nchange: ${change}\n`,
  });

  test.each([
    [
      "{constants: {total: 200 L}}",
      "{constants: {total: 200 L}, parameters: {bypass: {value: 8.12 %}, still: {value: 23.4 L}}}",
    ],
    [
      "{parameters: {bypass: {between: [0 %, 90 %]}, still: {value: 30 L}}} # why",
      "{parameters: {bypass: {between: [0 %, 90 %], value: 8.12 %}, still: {value: 23.4 L}}} # why",
    ],
    [
      "\n  constants:\n    total: 200 L   # litres\n\n# the end",
      "\n  constants:\n    total: 200 L   # litres\n  parameters: {bypass: {value: 8.12 %}}\n\n# the end",
    ],
  ])("%s", (change, expected) => {
    const values = expected.includes("still") ? found : found.slice(0, 1);
    expect(written(main(change), values)).toContain(`change: ${expected}\n`);
  });
});

describe("a part: into its `with:`", () => {
  const main = (compartments: string) => ({
    "tank.yaml": tank,
    "outer.yaml": network(`feeds: {in: {flow: 1 L/min, to: inner}}
compartments: {inner: {kind: part, use: tank.yaml, to: out}}
outlets: [out]`),
    "main.yaml": network(`feeds: {feed: {flow: 5 L/min, to: a}}
compartments:
${compartments}
outlets: [out]`),
  });
  const inPart = (part: string) => found.map((v) => ({ ...v, name: `${part}.${v.name}` }));

  test("in one line, with and without one before", () => {
    const part = "  a: {kind: part, use: tank.yaml, to: out}   # the core";
    expect(written(main(part), inPart("a"))).toContain(
      "  a: {kind: part, use: tank.yaml, to: out, with: {bypass: 8.12 %, still: 23.4 L}}   # the core\n",
    );
    const bound = "  a: {kind: part, use: tank.yaml, with: {total: 90 L}, to: out}";
    expect(written(main(bound), inPart("a"))).toContain("with: {total: 90 L, bypass: 8.12 %, still: 23.4 L}, to: out}");
  });

  test("on lines of its own", () => {
    const part = "  a:\n    kind: part\n    use: tank.yaml # shared\n    with:\n      total: 90 L # ours\n    to: out";
    expect(written(main(part), inPart("a"))).toContain(
      "    with:\n      total: 90 L # ours\n      bypass: 8.12 %\n      still: 23.4 L\n    to: out\n",
    );
  });

  test("of a part inside a part", () => {
    const part = "  a: {kind: part, use: outer.yaml, to: out}";
    expect(written(main(part), inPart("a.inner"))).toContain("with: {inner.bypass: 8.12 %, inner.still: 23.4 L}}");
  });

  test("not where an anchor would carry it elsewhere", () => {
    const parts =
      "  a: {kind: part, use: tank.yaml, with: &same {total: 90 L}, to: b}\n  b: {kind: part, use: tank.yaml, with: *same, to: out}";
    const { text, problems } = writeBack(networkOf(main(parts)), inPart("a"));
    expect(text).toBeUndefined();
    expect(problems.map((p) => p.code)).toEqual(["not-written-back", "not-written-back"]);
  });
});
