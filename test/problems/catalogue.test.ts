import { readdirSync } from "node:fs";
import { join } from "node:path";
import { expect, test } from "vitest";
import { catalogue } from "../../src/problems/catalogue.js";

const folder = join(import.meta.dirname, "../../src/problems/catalogue");

/** The catalogue is put together by spreading: a code that two files use would silently lose one. */
test("no code stands in two files", async () => {
  const codes: string[] = [];
  for (const file of readdirSync(folder)) {
    const module = (await import(join(folder, file))) as Record<string, object>;
    for (const entries of Object.values(module)) codes.push(...Object.keys(entries));
  }
  expect(codes.filter((code, i) => codes.indexOf(code) < i)).toEqual([]);
  expect(codes.sort()).toEqual(Object.keys(catalogue).sort());
});

test("codes are words in lower case", () => {
  expect(Object.keys(catalogue).filter((code) => !/^[a-z]+(-[a-z0-9]+)*$/.test(code))).toEqual([]);
});
