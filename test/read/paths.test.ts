import { expect, test } from "vitest";
import { beside, normalise } from "../../src/read/paths.js";

test.each([
  ["networks/v3/v3.yaml", "salt.csv", "networks/v3/salt.csv"],
  ["networks/v3/v3.yaml", "../../shared/x.yaml", "shared/x.yaml"],
  ["v3.yaml", "../x.yaml", "../x.yaml"],
  ["../a/v3.yaml", "../../x.yaml", "../../x.yaml"],
  ["v3.yaml", "./x.yaml", "x.yaml"],
  ["-", "x.yaml", "x.yaml"],
  ["/plant/v3.yaml", "../../x.yaml", "/x.yaml"],
  ["networks/v3.yaml", "/data/x.csv", "/data/x.csv"],
  ["C:\\plant\\v3.yaml", "..\\x.csv", "C:/x.csv"],
])("beside %s, %s is %s", (path, relative, result) => {
  expect(beside(path, relative)).toBe(result);
});

test.each([
  ["", "."],
  ["a/..", "."],
  ["a//b/./c/", "a/b/c"],
  ["/..", "/"],
])("normalise %j", (path, result) => {
  expect(normalise(path)).toBe(result);
});
