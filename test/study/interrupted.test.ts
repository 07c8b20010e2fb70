import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { fit } from "../../src/fit/fit.js";
import { parseStudy } from "../../src/parse/study.js";
import { answerOf } from "../../src/report/study/answer.js";
import { runStudy } from "../../src/study/run.js";

const read = (path: string) => {
  try {
    return readFileSync(path);
  } catch {
    return undefined;
  }
};
const path = "networks/tour/study.yaml";
const { document } = parseStudy(readFileSync(path, "utf8"), { path, read });
if (!document) throw new Error("the tour's study does not parse");
const study = document;

test("a study cut short ranks nothing, rules nothing out and concludes nothing", () => {
  const result = runStudy(study, { cancelled: () => true });
  expect(result.stopped).toBe("cancelled");
  for (const { fit, standing, survives } of result.ranking.filter((r) => r.fit?.stopped)) {
    expect(fit?.converged).toBe(false);
    expect(standing.weight).toBe(0);
    expect(survives).toBe(false);
  }
  expect(result.ranking.some((r) => r.fit?.stopped)).toBe(true);
  expect(result.predictions).toEqual([]);
  expect(answerOf(result)).toHaveLength(1);
  expect(answerOf(result)).toEqual([
    { about: "Interrupted", says: expect.stringMatching(/^Only \d of 2 networks were fitted/) },
  ]);
});

test("a fit cut short gives its best so far without errors or intervals", () => {
  const rival = study.rivals.find((r) => r.path.endsWith("corner.yaml"));
  let asked = 0;
  const { fit: cut } = fit(rival?.network ?? study.rivals[0].network, study.trials, { cancelled: () => ++asked > 3 });
  expect(cut?.stopped).toBe("cancelled");
  expect(cut?.parameters.length).toBe(2);
  for (const p of cut?.parameters ?? []) {
    expect(Number.isFinite(p.value)).toBe(true);
    expect(p.standardError).toBeUndefined();
    expect(p.interval95).toBeUndefined();
  }
});
