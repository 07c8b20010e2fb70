import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { flowSheet } from "../../src/draw/flow-sheet.js";
import type { FlowSheet } from "../../src/draw/sheet.js";
import { parseNetwork } from "../../src/parse/network.js";
import { v3 } from "./v3.js";

const sheetOf = (text: string): FlowSheet => {
  const { document, problems } = parseNetwork(text, { path: "v3.yaml", read: () => undefined });
  expect(problems).toEqual([]);
  return flowSheet(compile(document!).plant!, {
    injections: ["feed"],
    probes: ["product"],
    accents: new Set(["feed>product"]),
  });
};

describe("a flow sheet says what the file says", () => {
  const sheet = sheetOf(v3);

  test("bodies with their volumes and roles", () => {
    expect(sheet.bodies.map((b) => [b.name, b.role, b.volume])).toEqual([
      ["feed", "feed", 0],
      ["inlet-leg", "body", 0.15],
      ["bulk", "body", expect.closeTo(0.6, 12)],
      ["corner", "body", 0.2],
      ["sump", "dead", 0.05],
      ["product", "outlet", 0],
    ]);
  });

  test("streams with flows in the file's unit and shares in its spelling", () => {
    const said = sheet.streams.map((s) => [`${s.from}>${s.to}`, `${s.role}, ${s.label.replaceAll("\u2009", " ")}`]);
    expect(Object.fromEntries(said)).toEqual({
      "feed>inlet-leg": "forward, 9 L/min",
      "feed>product": "bypass, 1 L/min (bypass 10 %)",
      "bulk>product": "forward, 9 L/min",
      "inlet-leg>bulk": "forward, 12.9 L/min",
      "bulk>inlet-leg": "recycle, 3.86 L/min (30 %)",
      "bulk>corner": "exchange, 1.5 L/min (renewal)",
    });
  });

  test("marks, accents and the vessel in one line", () => {
    expect(sheet.bodies.find((b) => b.name === "feed")?.marks).toEqual(["injection"]);
    expect(sheet.bodies.find((b) => b.name === "product")?.marks).toEqual(["probe"]);
    expect(sheet.streams.filter((s) => s.accent).map((s) => s.to)).toEqual(["product"]);
    expect(sheet.says?.replaceAll("\u2009", " ")).toBe(
      "vessel 1000 L, of which 50 L out of reach; feed 10 L/min; mean time 95 min",
    );
  });
});

test("what a substance does otherwise than the liquid stands on the stream, or at the outlet that it alone reaches", () => {
  const path = "networks/tour/settler.yaml";
  const { document } = parseNetwork(readFileSync(path, "utf8"), { path, read: () => undefined });
  const { bodies, streams } = flowSheet(compile(document!, { caught: 0.9 }).plant!);
  const note = (name: string) => bodies.find((b) => b.name === name)?.note?.replaceAll("\u2009", " ");
  expect([note("effluent"), note("waste"), note("feed")]).toEqual(["solids 10 %", "solids 4 %", undefined]);
  const back = streams.find((s) => s.from === "settler" && s.to === "tank")?.label.replaceAll("\u2009", " ");
  expect(back).toBe("5 m³/h; solids 86 %");
});

test("a junction that one stream enters and one leaves is no stop: the stream runs on, its label names both share and junction", () => {
  const by = (split: string, junction: string) =>
    parseNetwork(
      `network: Two tanks\nformat: 1\nparameters: {slip: {value: 10 %, between: [0 %, 60 %]}}\nfeeds: {raw: {flow: 12 L/min, to: {${split}, a: rest}}}\ncompartments:\n${junction}  a: {kind: stirred, volume: 3 L, to: b}\n  b: {kind: stirred, volume: 4 L, to: out}\noutlets: [out]\n`,
      { path: "two.yaml", read: () => undefined },
    ).document!;
  const through = by("tee: slip", "  tee: {kind: junction, to: out}\n");
  const options = { notes: new Map([["raw>tee", "9 to 11 %"]]), accents: new Set(["tee>out"]) };
  const sheet = flowSheet(compile(through).plant!, options);
  expect(sheet.bodies.map((b) => b.name)).toEqual(["raw", "a", "b", "out"]);
  const past = sheet.streams.find((s) => s.from === "raw" && s.to === "out")!;
  expect(past).toMatchObject({ role: "bypass", accent: true, fitted: true });
  expect(past.label.replaceAll("\u2009", " ")).toBe("1.2 L/min (slip 10 %, 9 to 11 %) by tee");
  // Drawn as a bypass that is written without one.
  const direct = flowSheet(compile(by("out: slip", "")).plant!);
  const ways = (s: FlowSheet) => s.streams.map(({ from, to, flow, role }) => [from, to, flow, role]);
  expect(ways(sheet).sort()).toEqual(ways(direct).sort());
  // A junction that tracer is put in or watched at stays.
  expect(flowSheet(compile(through).plant!, { probes: ["tee"] }).bodies.map((b) => b.name)).toContain("tee");
});
