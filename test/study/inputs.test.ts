import { readFileSync } from "node:fs";
import { expect, test } from "vitest";
import { inputNames } from "../../src/check/asked.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { inputsOf } from "../../src/study/inputs.js";

const root = new URL("../../", import.meta.url);
const read = (path: string) => readFileSync(new URL(path, root));
const parsed = <T>(parse: (text: string, o: object) => { document: T | undefined }, path: string): T => {
  const { document } = parse(read(path).toString(), { path, read });
  if (!document) throw new Error(path);
  return document;
};

test("a study accepts just the inputs that can be moved, each of its kind", () => {
  const network = parsed(parseNetwork, "networks/demo/both.yaml");
  const duty = parsed(parseDuty, "networks/demo/normal.yaml");
  const names = inputNames(network, duty);
  const inputs = inputsOf({ network, duty, values: {}, kinetics: new Map() });
  expect(inputs.map((i) => i.name).sort()).toEqual([...names.keys()].sort());
  for (const i of inputs) {
    expect(i.dimension).toEqual(names.get(i.name)?.dimension);
    expect(i.between !== undefined).toBe(names.get(i.name)?.bounded);
  }
  expect(inputs.find((i) => i.name === "feed.flow")?.value).toBeCloseTo(0.04 / 60, 12);
});
