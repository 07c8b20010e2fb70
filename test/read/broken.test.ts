import { readFileSync } from "node:fs";
import { join } from "node:path";
import { expect, test } from "vitest";
import { shapeEntries } from "../../src/problems/catalogue/shape.js";
import { yamlEntries } from "../../src/problems/catalogue/yaml.js";
import { check } from "./read.js";

/** Files in which a code shows in a second form, or codes that no small file of their own can show. */
const again = { "unclosed-comment": "unclosed", "decimal-comma": "comma-in-braces" };
const notAlone = ["file-too-large", "too-many-parts", "and-more", "wrong-document"];
/** What only a network or its trial shows, not a shape: test/broken.test.ts has it. */
const notOfShape = ["not-yet"];

const codes = [...Object.keys(yamlEntries), ...Object.keys(shapeEntries)].filter(
  (code) => ![...notAlone, ...notOfShape].includes(code),
);
const files = [...codes.map((code) => [code, code]), ...Object.entries(again)];

test.each(files)("test/broken/%s.yaml has the one fault %s", (file, code) => {
  const text = readFileSync(join(import.meta.dirname, `../broken/${file}.yaml`), "utf8");
  expect(check(text).problems.map((p) => p.code)).toEqual([code]);
});
