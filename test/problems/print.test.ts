import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { problemJson } from "../../src/problems/json.js";
import { printProblems } from "../../src/problems/print.js";
import type { Problem } from "../../src/problems/problem.js";

const path = "networks/v3.yaml";

/** A problem at the first occurrence of `mark` in the text. */
function at(text: string, mark: string, more: Partial<Problem> = {}): Problem {
  const from = text.indexOf(mark);
  return {
    code: "share-sum",
    severity: "error",
    message: "shares out of 'bulk' add to 110 %",
    fix: "write `rest` for one of them, or make them add to 100 %",
    at: { source: { path, text }, from, to: from + mark.length },
    ...more,
  };
}

const marks = (printed: string) => printed.split("\n")[2];

test("the form that the contract shows", () => {
  const text = "network: v3\n".repeat(13).concat("    to: {product: 60 %, loop: 50 %}\n");
  expect(printProblems([at(text, "{product: 60 %, loop: 50 %}")])).toBe(
    [
      "networks/v3.yaml:14:9 share-sum: shares out of 'bulk' add to 110 %",
      "  14 |     to: {product: 60 %, loop: 50 %}",
      "     |         ^^^^^^^^^^^^^^^^^^^^^^^^^^^",
      "  fix: write `rest` for one of them, or make them add to 100 %",
    ].join("\n"),
  );
});

test("a warning says so", () => {
  expect(printProblems([at("a: b", "b", { severity: "warning" })])).toMatch(
    /^networks\/v3.yaml:1:4 warning share-sum: /,
  );
});

test("the earlier place stands before the fix, in the same form", () => {
  const text = "a: 1\nb: 2\na: 3\n";
  const source = { path, text };
  const printed = printProblems([
    at(text, "a: 3", { also: { at: { source, from: 0, to: 1 }, says: "it stands here first" } }),
  ]);
  expect(printed.split("\n").slice(3, 6)).toEqual([
    "networks/v3.yaml:1:1 it stands here first",
    "  1 | a: 1",
    "    | ^",
  ]);
  expect(printed.split("\n")[6]).toMatch(/^ {2}fix: /);
});

test("in file order, files as first spoken of", () => {
  const text = "a\nb\nc\n";
  const other = (mark: string): Problem => ({
    ...at(text, mark),
    at: { ...at(text, mark).at, source: { path: "a.yaml", text } },
  });
  const places = printProblems([at(text, "c"), other("b"), at(text, "a"), other("a")]).match(/^\S+:\d+:\d+/gm);
  expect(places).toEqual(["networks/v3.yaml:1:1", "networks/v3.yaml:3:1", "a.yaml:1:1", "a.yaml:2:1"]);
});

describe("marks stand under what they mean", () => {
  test("behind tabs", () => {
    const [, line, under] = printProblems([at("\ta:\tbad value", "bad")]).split("\n");
    expect(line.slice(under.indexOf("^"), under.lastIndexOf("^") + 1)).toBe("bad");
    expect(line).not.toContain("\t");
  });

  test("behind letters of two columns or of none", () => {
    expect(marks(printProblems([at("流量: bad", "bad")]))).toBe("    |       ^^^");
    expect(marks(printProblems([at("e\u0301: bad", "bad")]))).toBe("    |    ^^^");
    expect(marks(printProblems([at("😀: bad", "bad")]))).toBe("    |     ^^^");
  });

  test("over more lines, up to the end of the first", () => {
    expect(marks(printProblems([at("a: {b: 1,\n  c: 2}", "{b: 1,\n  c: 2}")]))).toBe("    |    ^^^^^^");
  });

  test("of nothing, one", () => {
    expect(marks(printProblems([at("a:\n", "")]))).toBe("    | ^");
    const source = { path, text: "a: 1" };
    expect(marks(printProblems([at("", "", { at: { source, from: 4, to: 4 } })]))).toBe("    |     ^");
  });

  test("in a window of a long line, wherever they are", () => {
    fc.assert(
      fc.property(fc.nat(400), fc.nat(400), fc.integer({ min: 1, max: 300 }), (left, right, length) => {
        const mark = "M".repeat(length);
        const printed = printProblems([at("x".repeat(left) + mark + "y".repeat(right), mark)]);
        const [, line, under] = printed.split("\n");
        expect(line.length).toBeLessThanOrEqual(110);
        const shown = line.slice(under.indexOf("^"), under.lastIndexOf("^") + 1);
        expect(shown).toMatch(/^M+$/);
        if (length < 60) expect(shown).toBe(mark);
      }),
    );
  });
});

test("a file cannot write escape codes to the terminal", () => {
  const printed = printProblems([at("a: \u001b[2Jx\u202e", "x", { message: "'\u001b[31m' is no key" })]);
  for (const control of ["\u001b", "\u202e"]) expect(printed).not.toContain(control);
});

test("colour only adds colour", () => {
  const problems = [at("a: b", "b"), at("a: b", "a", { severity: "warning" })];
  const coloured = printProblems(problems, { colour: true });
  const code = new RegExp(`${String.fromCharCode(27)}\\[\\d+m`, "g");
  expect(coloured).toMatch(code);
  expect(coloured.replace(code, "")).toBe(printProblems(problems));
});

test("nothing wrong, nothing printed", () => {
  expect(printProblems([])).toBe("");
});

test("as JSON", () => {
  expect(problemJson(at("a:\n  b: bad\n", "bad"))).toEqual({
    code: "share-sum",
    severity: "error",
    message: "shares out of 'bulk' add to 110 %",
    fix: "write `rest` for one of them, or make them add to 100 %",
    file: path,
    line: 2,
    column: 6,
    endLine: 2,
    endColumn: 9,
  });
});
