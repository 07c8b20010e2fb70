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

const seen = new Set<string>();

test.each(readdirSync(folder).filter((f) => f.endsWith(".yaml")))("%s", async (file) => {
  const { problems } = parseAny(readFileSync(new URL(file, folder), "utf8"), { path: file, read });
  for (const p of problems) seen.add(p.code);
  expect(problems.length).toBeGreaterThan(0);
  await expect(`${printProblems(problems)}\n`).toMatchFileSnapshot(`broken/${file.replace(/\.yaml$/, ".txt")}`);
});

/** Eleven megabytes are no file to keep. */
test("file-too-large", () => {
  const { problems } = parseAny("network: A title\n".padEnd(11 * 1024 * 1024, "#"), { path: "large.yaml" });
  for (const p of problems) seen.add(p.code);
  expect(printProblems(problems)).toMatchInlineSnapshot(`
    "large.yaml:1:1 file-too-large: the file has 11 MB; a document may have 10 MB
      1 | network: A title
        | ^
      fix: keep tables in CSV files and name them here"
  `);
});

test("every code that a file can show has a broken example, named by it", () => {
  const ofFiles = Object.keys(catalogue).filter((code) => !(code in runEntries) && !(code in libraryEntries));
  expect(ofFiles.filter((code) => !seen.has(code))).toEqual([]);
});

/** What only a run can find, and the tests that show it. */
const shownBy: Record<keyof typeof runEntries, string> = {
  "not-carried": "compile/carried.test.ts",
  "unknown-free": "fit/findings.test.ts",
  "nothing-to-fit": "fit/findings.test.ts",
  "no-points": "fit/findings.test.ts",
  "too-few-points": "fit/run-codes.test.ts",
  "no-start": "fit/run-codes.test.ts",
  "fit-not-converged": "fit/run-codes.test.ts",
  "fit-cancelled": "fit/findings.test.ts",
  "parameter-at-bound": "fit/findings.test.ts",
  "cannot-tell": "fit/findings.test.ts",
  "strongly-correlated": "fit/run-codes.test.ts",
  "wide-interval": "fit/run-codes.test.ts",
  "interval-cut": "fit/run-codes.test.ts",
  "residuals-correlated": "fit/uncertainty.test.ts",
  "several-optima": "fit/run-codes.test.ts",
  "scale-not-positive": "fit/findings.test.ts",
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
