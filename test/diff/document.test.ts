import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { diffDocuments } from "../../src/diff/document.js";
import { collector } from "../../src/problems/report.js";
import type { MapNode } from "../../src/read/tree.js";
import { readYaml } from "../../src/read/yaml.js";
import type { DocumentKind } from "../../src/schema/shape.js";
import { documents } from "../../src/schema/validators.js";

const tree = (text: string): MapNode => readYaml({ path: "x.yaml", text }, collector().report) as MapNode;

const diff = (kind: DocumentKind, a: string, b: string): string[] =>
  diffDocuments(tree(a), tree(b), documents[kind].shape).map(
    ({ what, name, before, after }) => `${what} ${name}: ${before ?? ""} -> ${after ?? ""}`,
  );

const trial = readFileSync("networks/demo/salt-normal.yaml", "utf8");

test("order, units, notes and defaults do not count", () => {
  expect(diff("trial", trial, trial)).toEqual([]);
  expect(diff("trial", trial, trial.replace("    scale: known\n", ""))).toEqual([]);
  expect(diff("trial", trial, trial.replace("pulse: 3 kg", "pulse: 3000 g"))).toEqual([]);
  expect(diff("trial", trial, trial.replace(/notes: >-\n.*\n.*\n/, ""))).toEqual([]);
});

test("what counts is named by its path, as written", () => {
  expect(diff("trial", trial, trial.replace("pulse: 3 kg ± 1 %", "pulse: 3.2 kg ± 1 %"))).toEqual([
    "changed injection.pulse: 3 kg ± 1 % -> 3.2 kg ± 1 %",
  ]);
  expect(diff("trial", trial, trial.replace("± 1 %, start", "± 2 %, start"))).toHaveLength(1);
  expect(diff("trial", trial, trial.replace("scale: known", "scale: free"))).toEqual([
    "changed readings[1].scale: known -> free",
  ]);
  expect(diff("trial", trial, trial.replace("    baseline: drift\n", ""))).toEqual([
    "removed readings[1].baseline: drift -> ",
  ]);
});

test("a text that looks like a number is a text", () => {
  expect(diff("duty", "duty: 1.0\nformat: 1\n", "duty: 1\nformat: 1\n")).toEqual(["changed duty: 1.0 -> 1"]);
});

test("a species more, a rate law changed", () => {
  const a =
    "chemistry: C\nformat: 1\nspecies: {A: {}, P: {}}\nconstants: {k: 1 1/min}\nreactions:\n  - {equation: A -> P, rate: k * A}\n";
  const b = a.replace("P: {}}", "P: {}, S: {}}").replace("k * A", "k * A * A").replace("1 1/min", "60 1/h");
  expect(diff("chemistry", a, b)).toEqual(["added species.S:  -> {}", "changed reactions[1].rate: k * A -> k * A * A"]);
});
