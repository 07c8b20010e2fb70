import { beforeAll, describe, expect, test } from "vitest";
import { at, backmix, json } from "../cli/fake.js";
import { truth } from "./demo-logs.js";

describe("the demo study", () => {
  const run = { page: "", summary: "", result: {} as unknown, figures: [] as string[] };

  beforeAll(async () => {
    const { status, out, written } = await backmix(["study", "networks/demo/study.yaml", "--starts", "0"]);
    expect(status).toBe(0);
    expect(out).toContain("report: ");
    const content = (ending: string): string => [...written].find(([path]) => path.endsWith(ending))?.[1] ?? "";
    run.page = content("report.html");
    run.summary = content("summary.md");
    run.result = JSON.parse(content("result.json"));
    run.figures = [...written.keys()].filter((p) => p.endsWith(".svg")).map((p) => p.replace(/.*\/(.*)\.svg$/, "$1"));
  });

  test("its report is under 1.5 MB, whole, and says nothing undefined", () => {
    expect(run.page.length).toBeGreaterThan(2e5);
    expect(Buffer.byteLength(run.page)).toBeLessThan(1.5e6);
    expect(run.page.replace(/<script[\s\S]*?<\/script>/g, "")).not.toMatch(/undefined|NaN|\[object/);
  });

  test("its summary is one page", () => {
    expect(run.summary.split("\n").length).toBeLessThan(66);
    expect(run.summary).toMatch(/^# .*\n\n- \*\*What is wrong\*\*: /);
  });

  test("keeps every figure of the page as a drawing of its own", () => {
    const wanted =
      "vessel fit-1 residuals-1 fit-2 residuals-2 rivals-1 rivals-2 profiles regions exit-age left-and-inside intensity " +
      "prediction-1 prediction-2 prediction-3 spread-1 spread-2 along-1 change-1 change-2 change-3 sweep-1-1 sweep-1-2 sweep-1-3";
    expect(run.figures).toEqual(wanted.split(" "));
    expect([...run.page.matchAll(/<figure [^>]*data-name="([^"]+)"/g)].map((m) => m[1])).toEqual(run.figures);
  });

  test("its intervals hold the values that the logs were made with", () => {
    const parameters = at(run.result, "ranking.0.fit.parameters") as Record<string, { interval95: [number, number] }>;
    const inUnits = {
      bypass: 100 * truth.bypass,
      riser: 1e3 * truth.riser,
      quiet: 1e3 * truth.quiet,
      renewal: 6e4 * truth.renewal,
    };
    for (const [name, value] of Object.entries(inUnits)) {
      const [low, high] = parameters[name].interval95;
      expect(low).toBeLessThan(value);
      expect(high).toBeGreaterThan(value);
    }
  });

  test("says what its conversion depends on", () => {
    const drivers = at(run.result, "predictions.0.drivers") as { name: string; share: number }[];
    expect(drivers.length).toBeGreaterThan(1);
    for (const { share } of drivers) expect(share).toBeLessThanOrEqual(1);
  });
});

test("the demo study is refused where one of its files is broken", async () => {
  const files = { "networks/demo/both.yaml": "network: Broken\nformat: 1\n" };
  const { status, document } = await json(["study", "networks/demo/study.yaml"], { files });
  expect(status).toBe(1);
  expect(at(document, "ok")).toBe(false);
});
