import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { countedLog, dyeLog, dyeStandards, truth } from "./detector-logs.js";

const folder = "networks/detectors";
const text = (path: string): string => readFileSync(path, "utf8");

test.each([
  ["counted.csv", countedLog],
  ["dye.csv", dyeLog],
  ["dye-standards.csv", dyeStandards],
] as const)("%s is what its generator makes", (name, made) => {
  expect(text(`${folder}/${name}`)).toBe(made());
});

describe("a counted tracer and a sorbing dye, fitted together", () => {
  const network = parseNetwork(text(`${folder}/bed.yaml`), { path: `${folder}/bed.yaml` });
  const trials = ["counted", "dye"].map((n) =>
    parseTrial(text(`${folder}/${n}.yaml`), { path: `${folder}/${n}.yaml`, read: text }),
  );

  test("nothing is warned of: a parameter that only a trial names is used", () => {
    for (const { problems } of [network, ...trials]) expect(problems.map((p) => p.code)).toEqual([]);
  });

  test("find the vessel and how far the bed holds the dye back", () => {
    if (!network.document) throw new Error("no network");
    const found = fit(
      network.document,
      trials.map((t) => t.document).filter((t) => t !== undefined),
      { starts: 4 },
    ).fit;
    expect(found?.converged).toBe(true);
    for (const p of found?.parameters ?? []) {
      const off = Math.abs(p.value - truth[p.name as keyof typeof truth]);
      expect([p.name, off / (p.standardError ?? 0) < 3.5]).toEqual([p.name, true]);
      // And it is known: to 5 % or better, the Péclet number to 10 %.
      expect((p.standardError ?? 1) / p.value).toBeLessThan(p.name === "peclet" ? 0.1 : 0.05);
    }
  });
});
