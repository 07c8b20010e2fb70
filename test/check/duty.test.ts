import { expect, test } from "vitest";
import { checkDuty } from "../../src/check/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { collector } from "../../src/problems/report.js";
import { readDuty } from "../resolve/documents.js";

const { document: network } = parseNetwork(`network: two feeds
format: 1
constants: {size: 100 L}
feeds: {feed: {flow: 10 L/min, to: tank}, rinse: {flow: 1 L/min, to: tank}}
compartments: {tank: {kind: stirred, volume: size, repeat: 2, to: product}}
outlets: [product]
`);

function check(...lines: string[]): string[] {
  const { found, told } = readDuty(`duty: test\nformat: 1\n${lines.join("\n")}\n`);
  if (!found || !network) throw new Error(told.join());
  const { report, problems } = collector();
  checkDuty(network, found, report);
  return problems.map(({ code, at, message }) => `${code} at ${at.source.text.slice(at.from, at.to)}: ${message}`);
}

test("a duty that fits", () =>
  expect(
    check("feeds: {feed: {A: 1 mol/L}, rinse: {}}", "report: [A at tank.2, t10 at product]", "with: {size: 90 L}"),
  ).toEqual([]));

test.each([
  [["feeds: {feed: {A: 1 mol/L}}"], /feed-not-given at test: .*'rinse'/],
  [["feeds: {feed: {}, rins: {}, rinse: {}}"], /unknown-place at rins:/],
  [["flows: {fed: 1 L/min}"], /unknown-place at fed:/],
  [["with: {sise: 90 L}"], /unknown-place at sise:/],
  [["with: {size: 90 L/min}"], /wrong-dimension at 90 L\/min:/],
  [["report: [t10 at tank.3]"], /unknown-place at t10 at tank.3:/],
])("%j", (lines, expected) => {
  const told = check(...lines);
  expect(told.length).toBe(1);
  expect(told[0]).toMatch(expected);
});
