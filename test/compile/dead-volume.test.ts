import { expect, test } from "vitest";
import { plantOf } from "../simulate/plants.js";

const vessel = (a: string, b: string, c: string, more = "") => `network: Volumes whose sum rounds
format: 1
feeds: {feed: {flow: 3 L/min, to: a}}
compartments:
  a: {kind: stirred, volume: ${a} L, repeat: 3, to: b}
  b: {kind: stirred, volume: ${b} L, to: c}
  c: {kind: tubular, volume: ${c} L, to: out}
${more}outlets: [out]
`;

test.each([
  ["0.1", "0.2", "0.7"],
  ["29.1", "0.3", "57.6"],
  ["0.001", "7.77", "33.3"],
])("rounding of %s + %s + %s L is no dead volume", (a, b, c) => {
  expect(plantOf(vessel(a, b, c)).volume.dead).toBe(0);
});

test("a dead body is", () => {
  const { volume } = plantOf(vessel("0.1", "0.2", "0.7", "  d: {kind: dead, volume: 0.5 L}\n"));
  expect(volume.dead).toBeCloseTo(0.0005, 12);
});
