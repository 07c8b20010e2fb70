import { readFileSync } from "node:fs";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { Part, type Plant } from "../../src/compile/plant.js";
import { type Balance, balancesOf } from "../../src/equations/balances.js";
import { linksOf } from "../../src/equations/links.js";
import { equationsMarkdown } from "../../src/equations/markdown.js";
import { texExpression } from "../../src/equations/tex.js";
import { isFault } from "../../src/expressions/fault.js";
import { parseExpression } from "../../src/expressions/parse.js";
import { parseNetwork } from "../../src/parse/network.js";

function plantOf(text: string, path = "vessel.yaml"): Plant {
  const { document, problems } = parseNetwork(text, { path });
  expect(problems.filter((p) => p.severity === "error")).toEqual([]);
  return compile(document as NonNullable<typeof document>).plant as Plant;
}

const vessel = `network: A_b * vessel
format: 1
parameters:
  bypass: {value: 10 %, between: [0 %, 60 %]}
feeds:
  feed:
    flow: 10 L/min
    to:
      leg: rest
      product: bypass
compartments:
  leg: {kind: tubular, volume: 50 L, to: chain}
  chain:
    kind: stirred
    volume: 300 L
    repeat: 3
    to:
      bulk: rest
      leg: 2 L/min
  bulk:
    kind: stirred
    volume: 650 L
    to: product
    exchange:
      corner: 1.5 L/min
  corner: {kind: stirred, volume: 200 L}
  sump: {kind: dead, volume: 20 L}
outlets: [product]
`;

const lineIn = (text: string, line: number): string => text.split("\n")[line - 1];

describe("balances", () => {
  const plant = plantOf(vessel);
  const balances = balancesOf(plant);
  const named = (name: string): Balance => balances.find((b) => b.name === name) as Balance;

  test("one per node that flow reaches, feeds left out", () => {
    expect(balances.map((b) => b.name)).toEqual(["leg", "chain.1", "chain.2", "chain.3", "bulk", "corner", "product"]);
    const states = plant.nodes.filter((n) => n.part === Part.Cell && n.inflow > 0);
    expect(balances.filter((b) => b.is === "state")).toHaveLength(states.length);
  });

  test("every term has the line that it came from", () => {
    for (const { terms } of balances) {
      for (const { says, line } of terms) {
        const at = lineIn(vessel, line);
        const stream = /stream (\w+) to (\w+)/.exec(says);
        if (stream) expect(at).toContain(stream[2].replace(/^chain$/, "chain"));
        else if (says.includes("exchange")) expect(at).toContain("corner: 1.5 L/min");
        else expect(at).toContain("chain:");
      }
    }
    expect(lineIn(vessel, named("bulk").line)).toContain("bulk:");
  });

  test("what enters every node leaves it: the terms hold all links of the plant", () => {
    const links = linksOf(plant);
    expect(links.map((l) => l.flow)).toEqual([...plant.flow]);
    const inward = balances.reduce((n, b) => n + b.terms.filter((t) => t.tex.startsWith("+")).length, 0);
    expect(inward).toBe(plant.flow.length);
  });

  test("a state", () => {
    expect(named("corner").tex).toBe(
      "V_{\\text{corner}} \\frac{dc_{\\text{corner}}}{dt} = Q_{\\text{bulk}\\leftrightarrow\\text{corner}}\\, c_{\\text{bulk}} - Q_{\\text{bulk}\\leftrightarrow\\text{corner}}\\, c_{\\text{corner}}",
    );
  });

  test("a tube is a delay of what enters it, with its space time", () => {
    const { tex, is } = named("leg");
    expect(is).toBe("delay");
    expect(tex).toContain("c_{\\text{feed}}\\!\\left(t - \\tau_{\\text{leg}}\\right)");
    expect(tex).toContain("c_{\\text{chain.3}}\\!\\left(t - \\tau_{\\text{leg}}\\right)");
    // 50 L at 9 + 2 L/min.
    expect(tex).toContain("= 4.54545\\ \\text{min}");
  });
});

describe("the page", () => {
  test("of a vessel with all there is", async () => {
    await expect(`${equationsMarkdown(plantOf(vessel))}\n`).toMatchFileSnapshot("vessel.txt");
  });

  test("of the demo vessel", async () => {
    const path = "networks/demo/both.yaml";
    const page = equationsMarkdown(plantOf(readFileSync(path, "utf8"), path));
    await expect(`${page}\n`).toMatchFileSnapshot("demo.txt");
  });

  test("every dollar sign has its other one, every brace too", () => {
    const page = equationsMarkdown(plantOf(vessel));
    for (const line of page.split("\n")) {
      expect((line.match(/\$/g) ?? []).length % 2).toBe(0);
      expect((line.match(/\{/g) ?? []).length).toBe((line.match(/\}/g) ?? []).length);
    }
  });
});

test.each([
  ["total - (riser - lost)", "\\text{total} - \\left(\\text{riser} - \\text{lost}\\right)"],
  ["0.15 * feed.flow", "0.15 \\cdot Q_{\\text{feed}}"],
  ["(a + b) * c / d", "\\frac{\\left(\\text{a} + \\text{b}\\right) \\cdot \\text{c}}{\\text{d}}"],
  ["-(a + b)", "-\\left(\\text{a} + \\text{b}\\right)"],
  ["a - -b", "\\text{a} - \\left(-\\text{b}\\right)"],
  ["(a * b)^2", "\\left(\\text{a} \\cdot \\text{b}\\right)^{2}"],
  [
    "sqrt(a) + log(b) + abs(c)",
    "\\sqrt{\\text{a}} + \\ln\\left(\\text{b}\\right) + \\left\\lvert \\text{c}\\right\\rvert",
  ],
  ["5 % * big_one", "5\\ \\text{\\%} \\cdot \\text{big\\_one}"],
  ["1.2e-7 mol/L", "1.2\\times 10^{-7}\\ \\text{mol/L}"],
])("%s in math", (written, tex) => {
  const e = parseExpression(written);
  expect(isFault(e)).toBe(false);
  if (!isFault(e)) expect(texExpression(e)).toBe(tex);
});
