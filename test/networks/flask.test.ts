import { readFileSync } from "node:fs";
import { beforeAll, describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { networkSettings } from "../../src/reaction/conditions.js";
import { predict } from "../../src/reaction/prediction.js";
import { at, backmix } from "../cli/fake.js";
import { flaskLog, logs, titrations, truth } from "./flask-logs.js";

const folder = "networks/flask";
const read = (path: string) => readFileSync(path, "utf8");

test.each(logs)("$trial.csv is what the stated truth gives, with its noise", (log) => {
  expect(read(`${folder}/${log.trial}.csv`)).toBe(flaskLog(log));
});

test("the titrations are, too", () => {
  const written = [...read(`${folder}/outlet.yaml`).matchAll(/value: (\S+) mol\/L/g)].map(([, value]) => value);
  expect(written).toEqual(titrations());
});

describe("from the flask to the vessel", () => {
  const run = { page: "", result: {} as unknown };

  beforeAll(async () => {
    const { status, written } = await backmix(["study", `${folder}/study.yaml`, "--starts", "0"]);
    expect(status).toBe(0);
    const content = (ending: string): string => [...written].find(([path]) => path.endsWith(ending))?.[1] ?? "";
    run.page = content("report.html");
    run.result = JSON.parse(content("result.json"));
  });

  test("kinetics and flow pattern together: the intervals hold what the data were made with", () => {
    const parameters = at(run.result, "ranking.0.fit.parameters") as Record<string, { interval95: [number, number] }>;
    const inUnits = {
      k30: 1e3 * truth.k30,
      activation: truth.activation / 1e3,
      corner: 1e3 * truth.corner,
      renewal: 6e4 * truth.renewal,
    };
    for (const [name, value] of Object.entries(inUnits)) {
      const [low, high] = parameters[name].interval95;
      expect(low).toBeLessThan(value);
      expect(high).toBeGreaterThan(value);
    }
  });

  test("what the vessel will make: the interval holds what the truth would", () => {
    const duty = parseDuty(read(`${folder}/more.yaml`), { path: `${folder}/more.yaml`, read }).document;
    const network = parseNetwork(read(`${folder}/corner.yaml`), { path: `${folder}/corner.yaml` }).document;
    const plant = network && duty && compile(network, { ...truth, ...networkSettings(duty) }).plant;
    if (!plant || !duty) throw new Error("no plant");
    const [conversion] = predict(plant, duty, truth).figures;
    const [low, high] = at(run.result, "predictions.0.interval95") as unknown as [number, number];
    expect(low).toBeLessThan(conversion.value);
    expect(high).toBeGreaterThan(conversion.value);
    expect(high - low).toBeLessThan(0.06);
  });

  test("the report shows flasks as curves, and analyses as a table", () => {
    expect(run.page).toContain("Analyses of the vessel where it had settled");
    expect(run.page).toContain("base at product");
    expect(run.page.match(/data-name="fit-\d/g)).toHaveLength(3);
    expect(run.page.replace(/<script[\s\S]*?<\/script>/g, "")).not.toMatch(/undefined|NaN|\[object/);
  });
});

test("--write puts the vessel's values into its file and the constants into the chemistry's", async () => {
  const trials = ["flask-20", "flask-40", "salt"].flatMap((t) => ["--trial", `${folder}/${t}.yaml`]);
  const { status, written, out } = await backmix([
    "fit",
    `${folder}/corner.yaml`,
    ...trials,
    "--starts",
    "0",
    "--write",
  ]);
  expect(status).toBe(0);
  expect([...written.keys()]).toEqual([`${folder}/corner.yaml`, `${folder}/hydrolysis.yaml`]);
  expect(written.get(`${folder}/hydrolysis.yaml`)).toMatch(/k30:\n {4}value: 0\.11\d* L\/mol\/s/);
  expect(out).toContain("written to networks/flask/hydrolysis.yaml");
});
