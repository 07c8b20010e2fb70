import { describe, expect, test } from "vitest";
import { at, backmix, json } from "./fake.js";
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
