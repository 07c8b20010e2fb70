import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { manualOf } from "../../.build/manual.js";
import { kinds } from "../../src/compartments/index.js";
import { functions } from "../../src/expressions/functions.js";
import { groupsOf } from "../../src/manual/keys.js";
import { anchor } from "../../src/manual/markdown.js";
import { valueExamples } from "../../src/manual/values.js";
import { parseNetwork } from "../../src/parse/network.js";
import { catalogue } from "../../src/problems/catalogue.js";
import { printProblems } from "../../src/problems/print.js";
import { documentShapes } from "../../src/schema/documents.js";
import { documentKinds } from "../../src/schema/shape.js";

const root = join(import.meta.dirname, "../..");
const made = manualOf(root);
const headings = [...made.matchAll(/^#+ (.*)$/gm)].map(([, title]) => title);

test("schemas/README.md is up to date: run `npm run build` and commit it", () => {
  expect(readFileSync(join(root, "schemas/README.md"), "utf8") === made).toBe(true);
});

test("it is a text, whatever a broken document holds", () => {
  expect(made.match(/[^\P{Cc}\t\n]/gu)).toBe(null);
  expect(made).toContain("PK\\x03\\x04");
});

test("every code has its place, with a document that shows it or its words", () => {
  const sections = new Map(made.split(/^#### /m).map((s) => [s.slice(0, s.indexOf("\n")), s]));
  for (const code of Object.keys(catalogue))
    expect(sections.get(code), code).toMatch(/```text\n[\s\S]*fix: [\s\S]*```/);
});

test("every kind of compartment has its place", () => {
  for (const kind in kinds) expect(headings).toContain(`network › compartments › NAME › kind: ${kind}`);
});

test("every reference leads to one heading", () => {
  const anchors = headings.map(anchor);
  for (const [, target] of made.matchAll(/\]\(#([^)]*)\)/g))
    expect(anchors.filter((a) => a === target).length, target).toBe(1);
});

test("the words of the language are told once each, whatever the document", () => {
  const shapes = documentShapes(kinds);
  for (const kind of documentKinds) {
    const paths = groupsOf(kind, shapes[kind]).map((g) => [kind, ...g.path].join(" › "));
    expect([...paths].sort().filter((p, i, all) => p === all[i - 1] && !p.endsWith("NAME"))).toEqual([]);
  }
});

describe("values as the manual shows them are read", () => {
  const network = (value: string): string =>
    `network: A\nformat: 1\nconstants: {total: 1000 L, riser: 150 L, volume-1: 1 L, named: "${value}"}\n` +
    "feeds: {feed: {flow: 10 L/min, to: bulk}}\ncompartments: {bulk: {kind: stirred, volume: 1 m3, to: product}}\noutlets: [product]\n";
  const examples = [...valueExamples.map((v) => v.text), ...Object.values(functions).map((f) => f.example ?? "")];
  test.each(examples)("%s", (text) => {
    const { problems } = parseNetwork(network(text));
    expect(printProblems(problems.filter((p) => p.severity === "error"))).toBe("");
  });
});
