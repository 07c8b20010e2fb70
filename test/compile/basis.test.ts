import { describe, expect, test } from "vitest";
import { checkDuty } from "../../src/check/duty.js";
import { networkText } from "../../src/cli/text/network.js";
import { readMoments } from "../../src/data/moments.js";
import { flowSheet } from "../../src/draw/flow-sheet.js";
import { inWords } from "../../src/draw/network.js";
import { equationsMarkdown } from "../../src/equations/markdown.js";
import { parseDuty } from "../../src/parse/duty.js";
import { parseNetwork } from "../../src/parse/network.js";
import { parseTrial } from "../../src/parse/trial.js";
import { collector } from "../../src/problems/report.js";
import { runChecks } from "../../src/simulate/checks.js";
import { tracerResponse } from "../../src/simulate/tracer.js";
import { trialResponse } from "../../src/simulate/trial.js";
import { inBasis } from "../../src/units/basis.js";
import { dimensions } from "../../src/units/dimension.js";
import { formatQuantity } from "../../src/units/format.js";
import { plantOf } from "../simulate/plants.js";

/** Kinds of bodies, recycles, exchange, shares and fixed flows, expressions and `feed.flow`. */
const byVolume = `network: Vessel
format: 1
constants: {total: 100 L, speed: 90 1/min}
parameters: {quiet: {value: 20 L, between: [1 L, 40 L]}, renewal: {value: 3 L/min, between: [1 L/min, 9 L/min]}}
requires: [quiet + 10 L < total]
feeds:
  feed: {flow: 10 L/min, to: {leg: rest, out: 5 %}}
compartments:
  leg: {kind: tubular, volume: 10 L, stagnant: {volume: 2 L, exchange: 0.5 L/min}, to: bulk}
  bulk: {kind: stirred, volume: total - quiet, to: {row: 4 L/min, out: rest}, exchange: {corner: renewal}}
  corner: {kind: stirred, volume: quiet}
  row: {kind: stirred, repeat: 3, volume: 9 L, backflow: 1 L/min, to: {leg: 0.1 * feed.flow, axial: rest}}
  axial: {kind: dispersed, volume: 4 L, peclet: 12, to: out}
outlets: [out]
checks: [{mean-time: out, equals: 125 L / 10 L/min}, {volume: bulk, equals: 80 L}, {flow: row, equals: 4 L/min}]
`;
/** The same, at a density of 1 kg/L. */
const byMass = byVolume.replace(/\bL\b/g, "kg").replace("format: 1", "format: 1\nbasis: mass");

const trials = {
  pulse: "injection: {at: feed, pulse: 50 g}",
  level: "injection: {at: bulk, step: {from: 1 g/L, to: 3 g/L}, lasting: 5 min}",
  rate: "injection: {at: leg, step: 3 g/min}",
  contents: "contents: {corner: 2 g/L}",
};

describe("the same network by mass, at a density of 1 kg/L", () => {
  const [volume, mass] = [byVolume, byMass].map((text) => plantOf(text));
  const inLiters = (text: string): string =>
    text
      .replace(/hold-up/g, "volume")
      .replace(/\bMass:/g, "Liquid:")
      .replace(/\bkg\b/g, "L")
      .replace(/basis:? `?mass`?\n/g, "");

  test("has the same flows, volumes and times in its table, description and equations", () => {
    expect(inLiters(networkText(mass)).replace(/ +/g, " ")).toBe(networkText(volume).replace(/ +/g, " "));
    const drawn = [mass, volume].map((plant) => inWords(flowSheet(plant)));
    expect(inLiters(drawn[0])).toBe(drawn[1]);
    const pages = [mass, volume].map((plant) => equationsMarkdown(plant).replace(/L\d+/g, "line"));
    expect(inLiters(pages[0])).toBe(pages[1]);
  });

  test("passes its checks, and answers a pulse alike", () => {
    expect(runChecks(mass).map((c) => c.holds)).toEqual([true, true, true]);
    const times = Float64Array.of(100, 1000, 4000);
    const [a, b] = [volume, mass].map((plant) => tracerResponse(plant, { at: "feed", form: "pulse" }, times));
    a.readings[0].value.forEach((v, i) => {
      expect(b.readings[0].value[i] / v).toBeCloseTo(1, 9);
    });
    expect(b.readings[0].moments.mean / a.readings[0].moments.mean).toBeCloseTo(1, 12);
  });

  test.each(Object.entries(trials))("reads the same numbers in a trial with a %s", (_, given) => {
    const times = { time: Float64Array.of(10, 100, 1000, 4000) };
    const read = (plant: typeof volume, unit: string): string[] => {
      const text = `trial: T\nformat: 1\n${given}\nreadings: [{at: out, scale: free}]\n`.replace(/\/L\b/g, `/${unit}`);
      const { document, problems } = parseTrial(text);
      if (!document) throw new Error(problems.map((p) => p.message).join());
      const [curve] = trialResponse(plant, document, [times]);
      const inUnit = { name: "", factor: unit === "L" ? 1 : 1e-3, offset: 0, dimension: dimensions.ratio };
      return Array.from(curve, (c) => formatQuantity(c, inUnit, 8));
    };
    expect(read(mass, "kg")).toEqual(read(volume, "L"));
  });
});

test("dimensions by mass", () => {
  expect(inBasis(dimensions.volume, "mass")).toEqual(dimensions.mass);
  expect(inBasis(dimensions.flow, "mass")).toEqual(dimensions["mass rate"]);
  expect(inBasis(dimensions["mass concentration"], "mass")).toEqual(dimensions.ratio);
  expect(inBasis(dimensions["molar concentration"], "mass")).toEqual([0, -1, 0, 1, 0, 0, 0]);
  expect(inBasis(dimensions.time, "mass")).toEqual(dimensions.time);
});

test("the data alone: recovery by mass, from the unit of the day's flow", () => {
  const rows = Array.from({ length: 200 }, (_, i) => `${i * 0.1},${(50 / 20) * Math.exp((-i * 0.1) / 2)}`);
  const trial = (flow: string, unit: string) => {
    const { document } = parseTrial(
      `trial: T\nformat: 1\nflows: {feed: ${flow}}\ninjection: {at: feed, pulse: 50 g}\nreadings: [{at: out, file: a.csv, time: {column: t, unit: h}, value: {column: c, unit: ${unit}}}]\n`,
      { path: "t.yaml", read: () => `t,c\n${rows.join("\n")}\n` },
    );
    if (!document) throw new Error("no trial");
    return readMoments(document).readings[0].recovery.value;
  };
  expect(trial("10 kg/h", "g/kg")).toBeCloseTo(1, 2);
  expect(trial("10 L/h", "g/kg")).toBeUndefined();
});

test("a duty by mass is refused, not misread", () => {
  const { document } = parseNetwork(byMass);
  const { document: duty } = parseDuty("duty: D\nformat: 1\nfeeds: {feed: {A: 1 mol/L}}\n");
  if (!document || !duty) throw new Error("no documents");
  const { report, problems } = collector();
  checkDuty(document, duty, report);
  expect(problems.map((p) => p.code)).toEqual(["not-yet"]);
});
