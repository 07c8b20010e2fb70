import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { collector } from "../../src/problems/report.js";
import { child, type Tree } from "../../src/read/tree.js";
import { readYaml } from "../../src/read/yaml.js";
import { plain, read } from "./read.js";

describe("values keep the text that was typed", () => {
  test.each([
    ["a: 010", "010"],
    ["a: 1e3", "1e3"],
    ["a: .inf", ".inf"],
    ["a: yes", "yes"],
    ["a: 2024-01-02", "2024-01-02"],
    ['a: "10 L"', "10 L"],
    ["a: 'it''s'", "it's"],
    ["a: 10 L/min ± 2 %   # comment", "10 L/min ± 2 %"],
    ["a: |\n  two\n  lines\n", "two\nlines\n"],
  ])("%s", (text, value) => {
    expect(plain(read(text).tree as Tree)).toEqual({ a: value });
  });

  test("a place is that of the token, quotes included", () => {
    const text = 'x: {k: "10 L", l: [ 3 ]}';
    const x = child(read(text).tree, "x");
    const shown = (node: Tree | undefined) => node && text.slice(node.at.from, node.at.to);
    expect(shown(child(x, "k"))).toBe('"10 L"');
    expect(shown(child(x, "l"))).toBe("[ 3 ]");
    expect(child(x, "k")).toMatchObject({ plain: false, empty: false });
  });

  test.each(["a:", "a: null", "a: ~", "a:   # nothing"])("%s is empty", (text) => {
    expect(child(read(text).tree, "a")).toMatchObject({ type: "scalar", empty: true });
  });

  test("byte-order mark and line ends of any system", () => {
    expect(plain(read("\uFEFFa: 1\r\nb:\r\n  c: 2\r\n").tree as Tree)).toEqual({ a: "1", b: { c: "2" } });
  });
});

describe("anchors", () => {
  test("an alias is a copy that keeps the place of what it copies", () => {
    const { tree, findings } = read("a: &x {b: 1}\nc: *x\n");
    expect(findings).toEqual([]);
    expect(plain(tree as Tree)).toEqual({ a: { b: "1" }, c: { b: "1" } });
    expect(child(child(tree, "c"), "b")?.at.from).toBe(10);
  });

  test("a name used anew means the latest", () => {
    expect(plain(read("a: &x 1\nb: *x\nc: &x 2\nd: *x\n").tree as Tree)).toMatchObject({ b: "1", d: "2" });
  });

  test("a bomb is refused before it goes off", () => {
    const lines = ["a0: &a0 [x, x, x, x, x, x, x, x, x]"];
    for (let i = 1; i < 12; i++)
      lines.push(
        `a${i}: &a${i} [${Array(9)
          .fill(`*a${i - 1}`)
          .join(", ")}]`,
      );
    expect(read(lines.join("\n")).problems.map((p) => p.code)).toEqual(["too-many-copies"]);
  });
});

describe("faults, each with its code and place", () => {
  test.each([
    ["", ["empty-file"]],
    ["# nothing but a comment\n", ["empty-file"]],
    ["- a\n- b", ["not-a-map - a\n- b"]],
    ["a:\n\tb: 1\n", ["tab-indent"]],
    ["a: 1\nb: 2\na: 3\n", ["duplicate-key a"]],
    ["a: {b: 1, b: 2}\nc: {d: 1, d: 2}\n", ["duplicate-key b", "duplicate-key d"]],
    ["network: V-3: as built\n", ["colon-in-text V-3: as built"]],
    ["a: @b\nunit: %\nz: {unit: %, b: `x`}\n", ["leading-character @b", "leading-character %", "leading-character %"]],
    ["a: | foo\n", ["leading-character | foo"]],
    ["rate: > 3\n", ["leading-character > 3"]],
    ["a: *see b*\n", ["leading-character *see b*"]],
    ["a: *b\n", ["unknown-anchor *b"]],
    ["a: &b note\n", ["unused-anchor &b note"]],
    ["a: &x {b: *x}\n", ["anchor-circle *x"]],
    ["a: !foo bar\n", ["yaml-tag !foo bar"]],
    ["a: {b: 1 L\nc: 2\n", ["unclosed {b: 1 L"]],
    ["a: {b: 1, c: [1, 2}\nd: 2\n", ["unclosed {b: 1, c: [1, 2}"]],
    ['a: "foo\nb: 1\n', ['unclosed "foo']],
    ["a: {column: Cond #2, unit: x}\nb: 3\n", ["unclosed {column: Cond #2, unit: x}"]],
    ["a: 1\n---\nb: 2\n", ["two-documents ---"]],
    ["? [a]\n: b\n", ["key-not-text [a]"]],
    ["__proto__: {x: 1}\n", ["forbidden-key __proto__"]],
    ["a: &x {b: 1}\nc:\n  <<: *x\n", ["merge-key <<"]],
    ["a:\n  b: 1\n c: 2\n", ["bad-indent  c: 2"]],
    ["a:\n  b: 1\n    c: 2\n", ["bad-indent c: 2"]],
    ["x: 2\na:1\ny: 3\n", ["colon-without-space a:1"]],
    ['a: "C:\\data"\n', ["yaml-syntax \\d"]],
    ['a: "x" y\n', ["yaml-syntax y"]],
  ])("%j", (text, findings) => {
    expect(read(text).findings).toEqual(findings);
  });

  test("a duplicate key shows the earlier place", () => {
    const [problem] = read("a: 1\na: 3\n").problems;
    expect(problem.also?.at).toMatchObject({ from: 0, to: 1 });
  });

  test("nesting of 101 is too deep, of 99 is not", () => {
    const nested = (n: number) => `a: ${"[".repeat(n)}1${"]".repeat(n)}`;
    expect(read(nested(99)).findings).toEqual([]);
    expect(read(nested(101)).problems.map((p) => p.code)).toEqual(["too-deep"]);
  });

  test("brackets that would overflow the stack are too deep, too", () => {
    expect(read(`a: ${"[".repeat(20_000)}`).problems.map((p) => p.code)).toEqual(["too-deep"]);
  });

  test("11 MB is too large", () => {
    expect(read("a: ".padEnd(11 * 1024 * 1024, "x")).problems[0]).toMatchObject({ code: "file-too-large" });
  });
});

describe("YAML's own traps are mended, so that the rest can be checked", () => {
  test.each([
    [
      "a: {volume: max(b, c), to: d}",
      "comma-in-braces max(b, c)",
      'a: {volume: "max(b, c)", to: d}',
      { volume: "max(b, c)", to: "d" },
    ],
    [
      "a: {volume: max(b, c, d)}",
      "comma-in-braces max(b, c, d)",
      'a: {volume: "max(b, c, d)"}',
      { volume: "max(b, c, d)" },
    ],
    ["a: {volume: 1,5 L, to: d}", "comma-in-braces 1,5 L", "a: {volume: 1.5 L, to: d}", { volume: "1.5 L", to: "d" }],
    [
      "a: {about: in mol, g or counts, not kg/L, to: d}",
      "comma-in-braces in mol, g or counts, not kg/L",
      'a: {about: "in mol, g or counts, not kg/L", to: d}',
      { about: "in mol, g or counts, not kg/L", to: "d" },
    ],
    ["a: [max(b, c) < d, e]", "comma-in-braces max(b, c) < d", 'a: ["max(b, c) < d", e]', ["max(b, c) < d", "e"]],
    ["a: {volume:1 L}", "colon-without-space volume:1 L", "a: {volume: 1 L}", { volume: "1 L" }],
  ])("%s", (text, found, fix, mended) => {
    const { tree, problems, findings } = read(text);
    expect(findings.at(-1)).toBe(found);
    expect(problems.at(-1)?.fix).toContain(`\`${fix}\``);
    expect(plain(child(tree, "a") as Tree)).toEqual(mended);
    expect(read(fix).findings).toEqual([]);
    expect(plain(child(read(fix).tree, "a") as Tree)).toEqual(mended);
  });

  test("one call of three arguments is one finding", () => {
    expect(read("a: {volume: max(b, c, d)}").findings).toHaveLength(1);
  });

  test("a word after a comma may be a key that was left without value", () => {
    expect(read("a: {about: red, blue}").findings).toEqual([]);
  });

  test("a key that was left without value is not such a trap", () => {
    expect(read("a: {b: , c: 1}").findings).toEqual([]);
  });
});

describe("whatever is typed", () => {
  const pieces = fc.constantFrom(
    ..."{}[]:,#&*!|>-?'\"%@`\t\n \\ab1",
    ": ",
    "\n  ",
    "- ",
    "<<",
    "a: ",
    "é",
    "😀",
    "\r\n",
    "\0",
  );
  const text = fc.array(pieces, { maxLength: 40 }).map((parts) => parts.join(""));

  test("reading never throws, says why there is no tree, and keeps every place inside the text", () => {
    fc.assert(
      fc.property(text, (t) => {
        const { tree, problems } = read(t);
        if (!tree) expect(problems.length).toBeGreaterThan(0);
        for (const { at } of problems) {
          expect(at.from).toBeGreaterThanOrEqual(0);
          expect(at.from).toBeLessThanOrEqual(t.length);
        }
        if (tree) expectInside(tree, t);
      }),
      { numRuns: 1000 },
    );
  });

  function expectInside(tree: Tree, t: string): void {
    expect(tree.at.from).toBeLessThanOrEqual(tree.at.to);
    expect(tree.at.to).toBeLessThanOrEqual(t.length);
    if (tree.type === "list") for (const item of tree.items) expectInside(item, t);
    if (tree.type === "map") for (const { value } of tree.entries) expectInside(value, t);
  }
});

test("what is no text is told once", () => {
  const codes = (text: string) => {
    const { report, problems } = collector();
    readYaml({ path: "a.yaml", text }, report);
    return problems.map((p) => p.code);
  };
  const bytes = (n: number) => String.fromCharCode(...Array.from({ length: n }, (_, i) => 1 + ((i * 97 + 13) % 255)));
  for (const text of ["PK\u0003\u0004 a workbook", "network: A\0", bytes(900)])
    expect(codes(text)).toEqual(["not-text"]);
  expect(codes("network: A\u0007\nformat: 1\n")).not.toContain("not-text");
});
