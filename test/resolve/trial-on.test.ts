import { describe, expect, test } from "vitest";
import { checkTrial } from "../../src/check/trial.js";
import { networkModel } from "../../src/fit/network-model.js";
import { settingsOfDay } from "../../src/fit/settings.js";
import type { Trial } from "../../src/model/trial.js";
import { parseTrial } from "../../src/parse/trial.js";
import { collector } from "../../src/problems/report.js";
import { trialOn } from "../../src/resolve/trial-on.js";
import { network, networkOf } from "./parts.js";

const vessel = networkOf({
  "main.yaml": network(`constants: {total: 100 L, speed: 60 1/min, renewal: 0.02 L * speed}
parameters: {part: {value: 40 %, between: [5 %, 95 %]}}
feeds: {feed: {flow: 10 L/min, to: bulk}}
compartments:
  bulk: {kind: stirred, volume: (1 - part) * total, to: out, exchange: {corner: renewal}}
  corner: {kind: stirred, volume: part * total}
outlets: [out]`),
});

function trial(settings: string): Trial {
  const text = `trial: T
format: 1
with: ${settings}
injection: {at: feed, pulse: 1 g}
readings: [{at: out, file: t.csv, time: {column: t, unit: min}, value: {column: c, unit: g/L}}]
`;
  const { document, problems } = parseTrial(text, { path: "t.yaml", read: () => "t,c\n0,0\n1,1\n2,1\n4,0.5\n9,0.1\n" });
  if (!document) throw new Error(problems.map((p) => p.message).join());
  return document;
}

const told = (settings: string): string[] => {
  const { report, problems } = collector();
  checkTrial(vessel, trial(settings), report);
  return problems.map((p) => `${p.code} ${p.at.source.text.slice(p.at.from, p.at.to)}`);
};

describe("constants of the day made of names of the network", () => {
  test("are what their numbers are", () => {
    const day = (settings: string, values = {}) => settingsOfDay(vessel, trial(settings), values);
    expect(day("{speed: speed / 2, total: 90 L}")).toEqual(day("{speed: 30 1/min, total: 90 L}"));
    expect(day("{speed: 100 1/min * part}", { part: 0.3 })).toEqual(day("{speed: 30 1/min}", { part: 0.3 }));
  });

  test("move with the parameters that they use: derivatives are those of the curve", () => {
    const own = trialOn(vessel, trial("{speed: 100 1/min * part}"));
    const model = networkModel(vessel);
    const wanted = [{ time: Float64Array.from([30, 120, 400, 900]) }];
    const at = (part: number) => ({ values: { part }, shifted: new Set<string>() });
    const directions = [{ names: new Map([["part", 1]]) }];
    const { slopes } = model.slopes?.(own, { ...at(0.4), values: { part: 0.4 } }, wanted, directions) ?? {};
    const h = 1e-5;
    const [up, down] = [0.4 + h, 0.4 - h].map((part) => model.respond(own, { part }, wanted)?.[0]);
    const found = slopes?.[0]?.[0];
    if (!found || !up || !down) throw new Error("no slopes");
    const scale = Math.max(...found.map(Math.abs));
    found.forEach((x, i) => {
      expect(Math.abs(x - (up[i] - down[i]) / (2 * h))).toBeLessThan(1e-6 * scale);
    });
  });

  test.each([
    ["{speed: spede / 2}", ["unknown-name spede"]],
    ["{speed: total / 2}", ["wrong-dimension total / 2"]],
    ["{spede: speed / 2}", ["unknown-place speed / 2"]],
    ["{speed: speed / 2, total: 90 L}", []],
  ])("%s", (settings, expected) => {
    expect(told(settings)).toEqual(expected);
  });
});
