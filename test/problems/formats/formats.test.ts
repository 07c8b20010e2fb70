import Ajv2020Module from "ajv/dist/2020.js";
import { describe, expect, test } from "vitest";
import { parseAny } from "../../../src/parse/any.js";
import { githubAnnotations } from "../../../src/problems/formats/github.js";
import { sarifLog } from "../../../src/problems/formats/sarif.js";
import type { Problem } from "../../../src/problems/problem.js";
import { sarifShape } from "./sarif-shape.js";

const text = `network: Two faults, one of them in two places
format: 1
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: 800 L, to: {product: 60 %, feed: 50 %}}
  product: {kind: stirred, volume: 1 L, to: bulk}
outlets: [product]
`;
const problems = (path = "networks/two, faults.yaml"): Problem[] => [...parseAny(text, { path }).problems];

const validate = new Ajv2020Module.default({ allErrors: true }).compile(sarifShape);

describe("SARIF", () => {
  test("has the shape of the standard", () => {
    for (const of of [[], problems(), problems("/abs/a b.yaml"), problems("C:\\lib\\a.yaml"), problems("-")])
      expect(validate(sarifLog(of, "1.2.3")) ? [] : validate.errors).toEqual([]);
  });

  test("says of every problem its rule, place, words and earlier place", () => {
    const found = problems();
    const [{ tool, results }] = sarifLog(found, "1.2.3").runs;
    expect(results.length).toBe(found.length);
    results.forEach((r, i) => {
      expect(tool.driver.rules[r.ruleIndex].id).toBe(found[i].code);
      expect(r.message.text).toContain(found[i].fix);
    });
    const taken = results.find((r) => r.ruleId === "name-taken");
    expect(taken?.locations[0].physicalLocation).toEqual({
      artifactLocation: { uri: "networks/two%2C%20faults.yaml" },
      region: { startLine: 7, startColumn: 11, endLine: 7, endColumn: 18 },
    });
    expect(taken?.relatedLocations?.[0].physicalLocation.region.startLine).toBe(6);
  });

  test("paths from the root of a disk become file URIs", () => {
    const uri = (path: string): string =>
      sarifLog(problems(path), "").runs[0].results[0].locations[0].physicalLocation.artifactLocation.uri;
    expect(uri("/lib/a b.yaml")).toBe("file:///lib/a%20b.yaml");
    expect(uri("C:\\lib\\a.yaml")).toBe("file:///C:/lib/a.yaml");
  });
});

describe("annotations for GitHub", () => {
  test("one line a problem; what would end a field is escaped", () => {
    const lines = githubAnnotations(problems()).split("\n");
    expect(lines.length).toBe(problems().length);
    for (const line of lines)
      expect(line).toMatch(/^::(error|warning) file=networks\/two%2C faults\.yaml,line=\d+,endLine=\d+,/);
    expect(lines.join("\n")).toContain("110 %25");
  });

  test("the files that led to a problem stand under it", () => {
    const use =
      "network: A\nformat: 1\nfeeds: {f: {flow: 1 L/min, to: a}}\ncompartments: {a: {kind: part, use: tank.yaml, to: out}}\noutlets: [out]\n";
    const tank = use.replace("kind: part, use: tank.yaml", "kind: stirred, volume: 1 Ll");
    const line = githubAnnotations(parseAny(use, { path: "main.yaml", read: () => tank }).problems);
    expect(line).toMatch(/^::error file=tank\.yaml,line=4,.*title=unknown-unit::.*%0Aused by main\.yaml:4:37$/);
  });
});
