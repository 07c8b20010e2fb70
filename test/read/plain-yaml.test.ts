import { readdirSync, readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { parseDocument } from "yaml";
import { collector } from "../../src/problems/report.js";
import { growTree } from "../../src/read/grow.js";
import { plainYaml } from "../../src/read/plain-yaml.js";
import type { Tree } from "../../src/read/tree.js";
import { corpusOf } from "../fuzz/corpus.js";

/** By the whole parser; undefined where it finds a fault. */
function whole(text: string): Tree | undefined {
  const document = parseDocument(text, { schema: "failsafe", uniqueKeys: false, prettyErrors: false });
  if (document.errors.length > 0) return undefined;
  const { report, problems } = collector();
  const tree = growTree({ path: "x", text }, document, report);
  return problems.length > 0 ? undefined : tree;
}

const bare = (tree: Tree | undefined): string =>
  JSON.stringify(tree, (key, value) => (key === "source" ? undefined : value));

/** What it reads is what the whole parser reads; true where it reads at all. */
function agrees(text: string): boolean {
  const tree = plainYaml({ path: "x", text });
  if (tree) expect(bare(tree)).toBe(bare(whole(text)));
  return tree !== undefined;
}

const shipped = [...corpusOf(fileURLToPath(new URL("../../", import.meta.url)))].flatMap(([path, bytes]) =>
  path.endsWith(".yaml") ? [new TextDecoder().decode(bytes)] : [],
);
const broken = readdirSync(new URL("../broken/", import.meta.url))
  .filter((f) => f.endsWith(".yaml"))
  .map((f) => readFileSync(new URL(`../broken/${f}`, import.meta.url), "utf8"));

describe("the quick reader", () => {
  test("reads most of what is written by hand, all of it as the whole parser does", () => {
    const read = shipped.filter(agrees).length;
    expect(read / shipped.length).toBeGreaterThan(0.7);
  });

  test("reads broken files as the whole parser does, or not at all", () => {
    broken.forEach(agrees);
  });

  test("... and files with something cut out, put in or doubled", () => {
    const bits = [
      ..."{ } [ ] , : # \" ' - & * ! | > ? % @ ` ~ \\ \t \r \n".split(" "),
      ...[
        ": ",
        " #",
        "- ",
        "\n  ",
        "\n",
        "  ",
        "null",
        "---\n",
        "<<: ",
        "a: b",
        "{a: b}",
        "[a, b]",
        "é",
        "\u2028",
        "'a'",
        '"b"',
      ],
    ];
    const texts = fc.constantFrom(...shipped.map((t) => t.slice(0, 3000)), ...broken);
    const edit = fc.record({ at: fc.nat(), take: fc.nat(12), put: fc.constantFrom("", ...bits), twice: fc.boolean() });
    let read = 0;
    fc.assert(
      fc.property(texts, fc.array(edit, { minLength: 1, maxLength: 3 }), (text, edits) => {
        let changed = text;
        for (const { at, take, put, twice } of edits) {
          const from = at % (changed.length + 1);
          const cut = changed.slice(from, from + take);
          changed = changed.slice(0, from) + (twice ? cut + cut : "") + put + changed.slice(from + take);
        }
        if (agrees(changed)) read++;
      }),
      { numRuns: 2500, seed: 20261201 },
    );
    expect(read).toBeGreaterThan(150);
  });

  test.each([
    ["a: b\n  c", "a text that goes on"],
    ["a: {b: c,\n  d: e}", "braces over two lines"],
    ["a: b: c", "a colon in a text"],
    ["a: b\na: c", "a key twice"],
    ["a: &x b", "an anchor"],
    ["a: *x", "an alias"],
    ["a: |\n  b", "a block of text"],
    ["- a", "a list alone"],
    ["a:\n - b\n  - c", "lines out of step"],
    ['a: "b\\n"', "an escape"],
    ["a: {b, c}", "a key without a value"],
    ["a:", "a key with nothing behind it"],
    ["", "an empty text"],
  ])("leaves %j to the whole parser: %s", (text) => {
    expect(plainYaml({ path: "x", text })).toBeUndefined();
  });
});
