import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { liveView } from "../../src/report/live/view.js";

const root = new URL("../../", import.meta.url);
const read = (path: string) => {
  try {
    return readFileSync(new URL(path, root));
  } catch {
    return undefined;
  }
};
const path = "networks/demo/normal.yaml";
const text = read(path)?.toString() ?? "";

test("a duty is shown in the network that is watched beside it, with its figures in words", () => {
  const { figures, problems, kind } = liveView(text, { path, read, beside: [path, "networks/demo/both.yaml"] });
  expect(kind).toBe("duty");
  expect(problems).toEqual([]);
  expect(figures.map((f) => f.name)).toEqual(["duty-1"]);
  expect(figures[0].caption).toMatch(/conversion of ester 88\.9/);
});

test("alone it shows its rate laws; what does not fit the network is told", () => {
  expect(liveView(text, { path, read }).figures.map((f) => f.name)).toEqual(["batch"]);
  const wrong = liveView(text, { path, read, beside: ["networks/tour/tank.yaml"] });
  expect(wrong.figures).toEqual([]);
  expect(wrong.problems.map((p) => p.code)).toContain("unknown-place");
});
