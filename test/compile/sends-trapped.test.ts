import { describe, expect, test } from "vitest";
import { codes, parse } from "../resolve/parts.js";

const network = (solids: string, more = "", exchange = ""): string[] =>
  codes(
    parse({
      "main.yaml": `network: N
format: 1
feeds: {feed: {flow: 10 L/min, to: tank}}
compartments:
  tank: {kind: stirred, volume: 50 L, to: {tank: 20 %, out: rest}, sends: {solids: ${solids}}${exchange}}
${more}outlets: [out]
`,
    }).problems,
  );
const corner = "  corner: {kind: stirred, volume: 2 L}\n";

describe("a substance that can never leave", () => {
  test("is told where it is kept", () => {
    expect(network("{tank: 100 %}")).toEqual(["sends-trapped main.yaml solids"]);
    expect(network("{tank: rest, out: 0 %}")).toEqual(["sends-trapped main.yaml solids"]);
    expect(network("{tank: 100 %}", corner, ", exchange: {corner: 1 L/min}")).toEqual([
      "sends-trapped main.yaml solids",
    ]);
  });
  test("is none where the least of it leaves", () => {
    expect(network("{tank: 99.99 %, out: rest}")).toEqual([]);
    expect(network("{out: 100 %}")).toEqual([]);
  });
});
