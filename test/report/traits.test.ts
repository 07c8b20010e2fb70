import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import type { Fit } from "../../src/fit/result.js";
import { parseNetwork } from "../../src/parse/network.js";
import { traitsOf } from "../../src/report/study/traits.js";

const tank = "tank: {kind: stirred, volume: 10 L, to:";
const spellings = {
  "straight to the outlet": ["{out: past, tank: rest}", `  ${tank} out}`],
  "by a junction": ["{tee: past, tank: rest}", `  ${tank} out}\n  tee: {kind: junction, to: out}`],
  "parted at a junction": ["tee", `  ${tank} out}\n  tee: {kind: junction, to: {out: past, tank: rest}}`],
  "joined at a junction": ["{tee: past, tank: rest}", `  ${tank} tee}\n  tee: {kind: junction, to: out}`],
};

const linesOf = (to: string, bodies: string): string[] => {
  const text = `network: n\nformat: 1\nconstants: {past: 20 %}\nfeeds: {raw: {flow: 1 L/min, to: ${to}}}\ncompartments:\n${bodies}\noutlets: [out]\n`;
  const { document, problems } = parseNetwork(text, { path: "n.yaml", read: () => undefined });
  expect(problems.filter((p) => p.severity === "error")).toEqual([]);
  const none = { parameters: [], covariance: { names: [], rows: [] } } as unknown as Fit;
  return traitsOf(compile(document!).plant!, none).map((t) => t.line);
};

describe("a bypass of the whole vessel is one however it is written", () => {
  test.each(Object.entries(spellings))("%s", (_, [to, bodies]) => {
    expect(linesOf(to, bodies)).toEqual([
      expect.stringMatching(/^20(\.0*)?\s% of 'raw' slips past the vessel to 'out'$/),
    ]);
  });

  test("what meets a volume on its way is none", () => {
    expect(linesOf("{tank: past, tee: rest}", `  ${tank} tee}\n  tee: {kind: stirred, volume: 1 L, to: out}`)).toEqual(
      [],
    );
  });
});
