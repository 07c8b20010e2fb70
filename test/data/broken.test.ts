import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { parseTrial } from "../../src/parse/trial.js";
import { dataEntries } from "../../src/problems/catalogue/data.js";

const read = (path: string) => {
  try {
    return readFileSync(path);
  } catch {
    return undefined;
  }
};

// `file-unreadable` needs a file system with something that is no file, `flow-log-still` a duty: test/broken.test.ts has both.
const elsewhere = ["file-unreadable", "flow-log-still"];

test.each(Object.keys(dataEntries).filter((code) => !elsewhere.includes(code)))(
  "%s: the broken example has this fault and no other",
  (code) => {
    const path = `test/broken/${code}.yaml`;
    const { problems } = parseTrial(readFileSync(path, "utf8"), { path, read });
    expect([...new Set(problems.map((p) => p.code))]).toEqual([code]);
  },
);
