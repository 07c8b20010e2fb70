import { describe, expect, test } from "vitest";
import { at, backmix, type Json, json } from "./fake.js";
import { tank, tube, files as vessels } from "./vessels.js";

const files = {
  ...vessels,
  "study.yaml": `study: One tank or two?
format: 1
rivals: [tank.yaml, row.yaml]
trials: [pulse.yaml]
duties: [duty.yaml]
changes: [larger.yaml, other.yaml]
out: made
seed: 7
`,
  "row.yaml": tank.replace("One tank", "Two tanks in a row").replace("volume: size,", "volume: size, repeat: 2,"),
  "tube.yaml": tube,
  "duty.yaml": `duty: Normal
format: 1
chemistry: decay.yaml
feeds: {feed: {A: 1 mol/L}}
report: [conversion of A, A at product]
`,
  "decay.yaml": `chemistry: Decay
format: 1
species: {A: {}}
constants: {k: 0.1 1/min}
reactions:
  - {makes: {A: -1}, rate: k * A}
`,
  "larger.yaml": `network: Larger
format: 1
change: {parameters: {size: {value: 200 L}}}
`,
  "other.yaml": `network: Elsewhere
format: 1
change: {parameters: {riser: {value: 200 L}}}
`,
};

describe("study", () => {
  test("keeps the contract, ranks and predicts", async () => {
    const { status, document } = await json(["study", "study.yaml"], { files });
    expect(status).toBe(0);
    for (const key of "backmix command inputs ranking predictions changes findings report".split(" ")) {
      expect(document).toHaveProperty(key);
    }
    expect(at(document, "ranking.0.network")).toBe("tank.yaml");
    const weights = [0, 1].map((i) => at(document, `ranking.${i}.weight`) as number);
    expect(weights[0] + weights[1]).toBeCloseTo(1, 12);
    for (const key of ["duty", "name", "value", "unit", "interval95", "bounds"]) {
      expect(at(document, "predictions.0")).toHaveProperty(key);
    }
    // First order in a tank of 80 L at 10 L/min: k tau / (1 + k tau) = 0.8 / 1.8.
    expect(at(document, "predictions.0.value")).toBeCloseTo(0.8 / 1.8, 4);
    expect(at(document, "predictions.0.unit")).toBe("1");
  });

  test("compares changes and says what it skips", async () => {
    const { document } = await json(["study", "study.yaml"], { files });
    const changes = at(document, "changes") as unknown as Record<string, unknown>[];
    const larger = changes.find((c) => c.change === "Larger" && c.name === "conversion of A");
    expect(larger?.value).toBeCloseTo(2 / 3, 10);
    expect(larger?.probabilityBetter).toBe(1);
    expect(changes.find((c) => c.change === "Elsewhere")?.skipped).toContain("'riser'");
  });

  test("writes the report, its summary and its drawings beside the study, or where it is told", async () => {
    const { out, err, written } = await backmix(["study", "study.yaml"], { files });
    expect(err).toBe("");
    expect(out).toContain("report: made/report.html");
    expect([...written.keys()]).toEqual(expect.arrayContaining(["made/report.html", "made/summary.md"]));
    expect([...written.keys()].filter((f) => f.endsWith(".svg")).length).toBeGreaterThan(0);
    expect(written.get("made/report.html")).toMatch(/^<!doctype html>[\s\S]*One tank or two\?[\s\S]*<\/html>\s*$/);
    const saved = JSON.parse(written.get("made/result.json") ?? "");
    const { document } = await json(["study", "study.yaml", "-o", "elsewhere"], { files });
    expect(at(document, "report")).toBe("elsewhere/report.html");
    expect({ ...saved, report: undefined, problems: undefined }).toEqual({
      ...document,
      report: undefined,
      problems: undefined,
    });
  });

  test("an interrupt prints what was finished, marked, and ends with 130", async () => {
    const { status, out, written } = await backmix(["study", "study.yaml"], { files, cancelled: () => true });
    expect(written.size).toBe(0);
    expect(status).toBe(130);
    expect(out).toContain("interrupted: what was finished");
  });

  test("rests on every file that it names", async () => {
    const { document } = await json(["study", "study.yaml"], { files });
    const paths = (at(document, "inputs") as unknown as { path: string }[]).map((i) => i.path);
    expect(paths).toEqual(
      "study.yaml tank.yaml row.yaml pulse.yaml pulse.csv duty.yaml decay.yaml larger.yaml other.yaml".split(" "),
    );
  });
});

describe("sweeps and aims of a study", () => {
  const asking = {
    ...files,
    "study.yaml": `${files["study.yaml"]}sweeps:
  - {duty: duty.yaml, over: {feed.flow: {between: [5 L/min, 20 L/min], points: 3, spacing: log}}}
  - {duty: duty.yaml, change: larger.yaml, over: {k: {between: [0.1 1/min, 0.2 1/min], points: 2}}}
  - {duty: duty.yaml, change: other.yaml, over: {k: {between: [0.1 1/min, 0.2 1/min], points: 2}}}
aims:
  - {duty: duty.yaml, aim: conversion of A = 50 %, by: feed.flow, between: [1 L/min, 20 L/min]}
  - {duty: duty.yaml, aim: conversion of A >= 99 %, by: feed.flow, between: [1 L/min, 20 L/min], confidence: 90 %}
`,
  };

  test("are answered by the fitted vessel, with a change where one is named, and what cannot be asked is skipped", async () => {
    const { status, document } = await json(["study", "study.yaml"], { files: asking });
    expect(status).toBe(0);
    const best = (key: string) =>
      (at(document, key) as unknown as Json[]).filter((x) => at(x, "network") === "tank.yaml");
    const [flow, larger, other] = best("sweeps");
    // 80 L at 5, 10, 20 L/min; with the change 200 L at 10 L/min.
    [1.6, 0.8, 0.4].forEach((x, k) => {
      expect(at(flow, `points.${k}.figures.0.value`)).toBeCloseTo(x / (1 + x), 3);
    });
    [2, 4].forEach((x, k) => {
      expect(at(larger, `points.${k}.figures.0.value`)).toBeCloseTo(x / (1 + x), 9);
    });
    expect(at(larger, "change")).toBe("Larger");
    expect(at(other, "skipped")).toMatch(/riser/);
    const [half, most] = best("aims");
    expect(at(half, "crossings.0.value")).toBeCloseTo(8, 1);
    expect(at(half, "crossings.0.figure.value")).toBeCloseTo(0.5, 9);
    expect(at(most, "reachable")).toBe(false);
    expect(at(most, "best.value")).toBeCloseTo(1, 9);
  });

  test("stand on the page, in the summary and on the terminal", async () => {
    const { out, written } = await backmix(["study", "study.yaml"], { files: asking });
    expect(out).toContain("conversion of A = 50 % at feed.flow = ");
    expect(out).toContain("Infeasible: no feed.flow from 1 L/min to 20 L/min gives conversion of A ≥ 99 %");
    expect(written.get("made/report.html")).toContain('<section id="aims"><h2>What it takes</h2>');
    expect(written.get("made/report.html")).toContain('id="figure-sweep-1-1"');
    // The trial was made at 10 L/min: 8 L/min, and a sweep from 5 to 20, are not what it tells of.
    expect(out.replace(/\s+/g, " ")).toContain("Beyond the trials, which were made at 10 L/min only: extrapolated.");
    const page = (written.get("made/report.html") ?? "").replace(/\u00a0/g, " ");
    expect(page).toContain("Partly beyond the trials, which were made at 10 L/min only");
    expect(page).toContain("feed.flow is looked at from 1 L/min to 20 L/min, tested at 10 L/min only");
    expect(written.get("made/summary.md")).toContain("**What it takes**");
  });
});
