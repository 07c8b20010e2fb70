import { readdirSync, readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { parseAny } from "../src/parse/any.js";
import { libraryEntries } from "../src/problems/catalogue/library.js";
import { runEntries } from "../src/problems/catalogue/runs.js";
import { catalogue } from "../src/problems/catalogue.js";
import { printProblems } from "../src/problems/print.js";

/** Broken documents, each with the very text that a user sees. Healthy files that they name stand in `parts`. */
const folder = new URL("./broken/", import.meta.url);

function read(path: string): Uint8Array | undefined {
  try {
    return readFileSync(new URL(path, folder));
  } catch {
    return undefined;
  }
}

/** A folder stands where a file is named. */
const obstacle = (path: string): "folder" | undefined => (path === "parts" ? "folder" : undefined);

const seen = new Set<string>();

test.each(readdirSync(folder).filter((f) => f.endsWith(".yaml")))("%s", async (file) => {
  const { problems } = parseAny(readFileSync(new URL(file, folder), "utf8"), { path: file, read, obstacle });
  for (const p of problems) seen.add(p.code);
  expect(problems.length).toBeGreaterThan(0);
  await expect(`${printProblems(problems)}\n`).toMatchFileSnapshot(`broken/${file.replace(/\.yaml$/, ".txt")}`);
});

/** Files that are too large to keep. */
test("file-too-large", () => {
  const { problems } = parseAny("network: A title\n".padEnd(11 * 1024 * 1024, "#"), { path: "large.yaml" });
  for (const p of problems) seen.add(p.code);
  expect(printProblems(problems)).toMatchInlineSnapshot(`
    "large.yaml:1:1 file-too-large: the file has 11 MB; a document may have 2 MB
      1 | network: A title
        | ^
      fix: keep tables in CSV files and name them here"
  `);
});

/** Nor is half a gigabyte. */
test("table-too-large", () => {
  const text = readFileSync(new URL("zone-twice.yaml", folder), "utf8");
  const large = new Uint8Array(501 * 1024 * 1024);
  const { problems } = parseAny(text, { path: "large.yaml", read: () => large });
  for (const p of problems) seen.add(p.code);
  expect(printProblems(problems.slice(0, 1))).toMatchInlineSnapshot(`
    "zone-twice.csv:1:1 table-too-large: 'zone-twice.csv' has 501 MB; a table may have 500 MB
      fix: take out columns that nothing reads, or join cells that are mixed as one"
  `);
});

/** Without links to folders nothing goes so deep. */
test("use-too-deep", () => {
  const use = (n: number) => `network: A\nformat: 1\nbased-on: a${n}.yaml\nchange: {constants: {k: 1}}\n`;
  const read = (path: string) => use(Number(/\d+/.exec(path)?.[0]) + 1);
  const { problems } = parseAny(use(1), { path: "a0.yaml", read });
  for (const p of problems) seen.add(p.code);
  expect(printProblems(problems).split("\n").slice(0, 5).join("\n")).toMatchInlineSnapshot(`
    "a50.yaml:3:11 use-too-deep: files lead to files more than 50 deep
      3 | based-on: a51.yaml
        |           ^^^^^^^^
      base of a49.yaml:3:11
      base of a48.yaml:3:11"
  `);
});

test("too-many-parts", () => {
  const { problems } = parseAny(`network: A\noutlets: [${"a, ".repeat(50_000)}a]\n`, { path: "long.yaml" });
  for (const p of problems) seen.add(p.code);
  expect(problems.map((p) => p.code)).toEqual(["too-many-parts"]);
});

test("too-many-files", () => {
  const uses = Array.from({ length: 1001 }, (_, i) => `a${i}: {kind: part, use: p${i}.yaml}`).join(", ");
  const { problems } = parseAny(`network: A\nformat: 1\ncompartments: {${uses}}\n`, {
    path: "many.yaml",
    read: (file) => `network: ${file}\nformat: 1\noutlets: []\n`,
  });
  for (const p of problems) seen.add(p.code);
  expect(problems.map((p) => p.code)).toContain("too-many-files");
});

test("and-more", () => {
  const constants = Array.from({ length: 300 }, (_, i) => `c${i}: 1 L`).join(", ");
  const { problems } = parseAny(
    `network: A\nformat: 1\nconstants: {${constants}}\nfeeds: {f: {flow: 1 L/min, to: a}}\ncompartments: {a: {kind: stirred, volume: 1 L, to: b}}\noutlets: [b]\n`,
    { path: "many.yaml" },
  );
  for (const p of problems) seen.add(p.code);
  expect(problems.map((p) => p.code)).toEqual([...Array(100).fill("unused-name"), "and-more"]);
});

test("every code that a file can show has a broken example, named by it", () => {
  const ofFiles = Object.keys(catalogue).filter((code) => !(code in runEntries) && !(code in libraryEntries));
  expect(ofFiles.filter((code) => !seen.has(code))).toEqual([]);
});

/** What only a run can find, and the tests that show it. */
const shownBy: Record<keyof typeof runEntries, string> = {
  "not-carried": "compile/carried.test.ts",
  "too-many-passes": "simulate/closed.test.ts",
  "loop-too-short": "simulate/ode.test.ts",
  "trial-of-reaction": "cli/fit-reaction.test.ts",
  "flows-vary": "simulate/logged-flows.test.ts",
  "flows-vary-body": "simulate/logged-flows.test.ts",
  "too-many-cells": "compile/carried.test.ts",
  "unknown-free": "fit/findings.test.ts",
  "nothing-to-fit": "fit/findings.test.ts",
  "no-points": "fit/findings.test.ts",
  "no-signal-to-fit": "fit/run-codes.test.ts",
  "all-beyond-limits": "fit/nothing.test.ts",
  "only-noise-to-fit": "fit/nothing.test.ts",
  "explains-nothing": "fit/nothing.test.ts",
  "one-reading-rules": "fit/one-reading.test.ts",
  "trial-contradicted": "fit/reaction.test.ts",
  "lack-of-fit": "fit/replicates.test.ts",
  "spreads-differ": "fit/run-codes.test.ts",
  "too-few-points": "fit/run-codes.test.ts",
  "no-start": "fit/run-codes.test.ts",
  "fit-not-converged": "fit/run-codes.test.ts",
  "fit-cancelled": "fit/findings.test.ts",
  "parameter-at-bound": "fit/findings.test.ts",
  "cannot-tell": "fit/findings.test.ts",
  "strongly-correlated": "fit/run-codes.test.ts",
  "wide-interval": "fit/run-codes.test.ts",
  "interval-not-linear": "fit/p1.test.ts",
  "interval-by-profile": "fit/p1.test.ts",
  "interval-cut": "fit/run-codes.test.ts",
  "residuals-correlated": "fit/uncertainty.test.ts",
  "several-optima": "fit/run-codes.test.ts",
  "scale-not-positive": "fit/findings.test.ts",
  "plan-many": "plan/plan.test.ts",
  "contents-missing": "transient/duty.test.ts",
  "plan-endless": "plan/plan.test.ts",
};

test.each(Object.entries(shownBy))("%s is shown by %s", (code, file) => {
  expect(readFileSync(new URL(file, import.meta.url), "utf8")).toContain(`"${code}"`);
});

test("no broken example is without its text, no text without its example", () => {
  const named = (end: string) =>
    readdirSync(folder)
      .filter((f) => f.endsWith(end))
      .map((f) => f.slice(0, -end.length))
      .sort();
  expect(named(".txt")).toEqual(named(".yaml"));
});
