import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";

const network = "networks/demo/both.yaml";
const draft = "networks/demo/draft.yaml";
const command = ["plan", network, "--trial", draft];

describe("plan", () => {
  test("says amount, end, samples, what it would tell, and what to beware of", async () => {
    const { status, document } = await json(command);
    expect(status).toBe(0);
    const keys =
      "amount recommendedAmount stop stopWithinBounds meanTime readings parameters parametersWithRecommended truncation alarms cautions";
    for (const key of ["backmix", "command", "inputs", ...keys.split(" ")]) expect(document).toHaveProperty(key);
    expect(at(document, "amount")).toEqual({ value: 3, unit: "kg", is: "pulse" });
    expect(at(document, "meanTime.value")).toBeCloseTo(60, 0);
    expect(at(document, "readings.0.expected.unit")).toBe("g/L");
    const quiet = at(document, "parameters.quiet") as unknown as { value: number; interval95: [number, number] };
    expect(quiet.value).toBeCloseTo(300, 9);
    expect(quiet.interval95[0]).toBeLessThan(300);
    expect(quiet.interval95[1]).toBeGreaterThan(300);
    const times = at(document, "readings.0.time.values") as unknown as number[];
    expect(times.filter((t) => t < 0).length).toBe(10);
    expect((at(document, "readings.0.expected.values") as unknown as number[]).length).toBe(times.length);
  });

  test("people read the same, with alarms and cautions", async () => {
    const { out } = await backmix([...command, "--until", "3 h"]);
    expect(out).toContain("stop at        3 h");
    expect(out).toMatch(/alarm stops-early: .*dead volume/s);
    expect(out).toMatch(/caution: Use only a tracer that the operator/);
    expect(out).toMatch(/^ {2}renewal /m);
  });

  test("the field sheet has a row for every sample and room to write", async () => {
    const md = await backmix([...command, "--samples", "20", "-o", "sheet.md"]);
    const sheet = md.written.get("sheet.md") ?? "";
    expect(sheet).toContain("## Samples at product");
    expect(sheet).toMatch(/^\| −0:00:\d\d \|/m);
    expect(sheet).toMatch(/^\| \d+:\d\d:\d\d \|/m);
    expect(sheet.split("\n").filter((l) => /^\| [−\d]/.test(l)).length).toBeGreaterThanOrEqual(28);
    expect(sheet).toContain("| Permission in writing from |");
    const html = await backmix([...command, "-o", "sheet.html"]);
    expect(html.written.get("sheet.html")).toMatch(/^<!doctype html>[\s\S]*<h2>Signed<\/h2>[\s\S]*<\/html>\n$/);
  });

  test("a logger's even samples, and a shorter test tells less", async () => {
    const long = await json([...command, "--every", "30 s"]);
    const times = at(long.document, "readings.0.time.values") as unknown as number[];
    expect(times[20] - times[19]).toBeCloseTo(0.5, 9);
    const short = await json([...command, "--every", "30 s", "--until", "60 min"]);
    const error = (d: typeof long.document): number => at(d, "parameters.quiet.expectedStandardError") as number;
    expect(error(short.document)).toBeGreaterThan(1.8 * error(long.document));
  });

  test.each([
    ["no draft", ["plan", network]],
    ["a sheet of an unknown sort", [...command, "-o", "sheet.docx"]],
    ["an unknown parameter", [...command, "--free", "queit"]],
    ["too many samples", [...command, "--samples", "100000"]],
    ["samples every nothing", [...command, "--every", "0 s"]],
  ])("%s is wrong usage", async (_, args) => {
    const { status, err } = await backmix(args);
    expect(status).toBe(2);
    expect(err).toMatch(/^backmix: .+\n/);
  });
});
