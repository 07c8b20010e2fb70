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
