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

describe("bodies of more than one node, and of none", () => {
  const plant = plantOf(`network: Bodies with more to say
format: 1
feeds: {f: {flow: 6 L/min, to: a}}
compartments:
  a: {kind: stirred, volume: 30 L, repeat: 3, backflow: 50 %, stagnant: {volume: 6 L, exchange: 1.5 L/min}, to: b}
  b: {kind: dispersed, volume: 12 L, peclet: 5, ends: open, to: {c: 50 %, d: rest}}
  c: {kind: laminar, volume: 10 L, to: g}
  d: {kind: cascade, volume: 10 L, tanks: 2.5, stagnant: {volume: 6 L, exchange: 1 L/min}, to: g}
  g: {kind: dispersed, volume: 10 L, peclet: 20, to: out}
outlets: [out]
`);
  const page = equationsMarkdown(plant);

  test("the page", async () => {
    await expect(`${page}\n`).toMatchFileSnapshot("bodies.txt");
  });

  test("forward flow and backflow between two tanks are one flow", () => {
    const rows = page.split("\n").filter((l) => l.startsWith("| $Q_{\\text{a.1}\\to\\text{a.2}}$ |"));
    expect(rows).toEqual(["| $Q_{\\text{a.1}\\to\\text{a.2}}$ | 9 L/min | L5 |"]);
    const second = balancesOf(plant).find((b) => b.name === "a.2") as Balance;
    expect(new Set(second.terms.map((t) => t.tex)).size).toBe(second.terms.length);
  });

  test("no flow gets lost in that", () => {
    const into = (links: readonly { to: number; flow: number }[]): number[] => {
      const sums = plant.nodes.map(() => 0);
      for (const l of links) sums[l.to] += l.flow;
      return sums;
    };
    const all = Array.from(plant.flow, (flow, k) => ({ to: plant.to[k], flow }));
    for (const [i, q] of into(linksOf(plant)).entries()) expect(q).toBeCloseTo(into(all)[i], 18);
  });

  test("inner volumes and exchanges by the keys that they come from", () => {
    expect(page).toContain("$V_{\\text{a.2}} = V_{\\text{a}} / 3$");
    expect(page).toContain("$V_{\\text{a.2.stagnant}} = \\text{stagnant.volume}_{\\text{a}} / 3$");
    expect(page).toContain("= \\text{stagnant.exchange}_{\\text{a}} / 3$ | 0.5 L/min");
  });

  test("the mean time is the exact one", () => {
    // 36/6 for a, (1 + 2/5) 12/6 for b, then 10/3 or 16/3 on half the flow each, and 10/6: 6 + 2.8 + 13/3 + 5/3 min.
    expect(page).toContain("\\bar t = 14.8\\ \\text{min}");
    expect(page).toContain("V_\\text{active} / Q = 14\\ \\text{min}");
  });

  test("every symbol of a body's curve is on the page", () => {
    for (const b of balancesOf(plant).filter((x) => x.is === "body")) {
      expect(b.also?.[0]).toContain(`G_{\\text{${b.name}}}(s) =`);
      expect(b.also?.[1]).toContain(`\\hat m_{\\text{${b.name}}}(s) =`);
    }
    expect(page).toContain("\\text{peclet}_{\\text{b}} = 5");
  });
});

test("the flow into a part with repeats is that into the first", () => {
  const core = `network: Core
format: 1
feeds: {feed: {flow: 1 L/min, to: tank}}
compartments:
  tank: {kind: stirred, volume: 10 L, to: {loop: 3 * feed.flow, out: rest}}
  loop: {kind: tubular, volume: 2 L, to: tank}
outlets: [out]
`;
  const { document } = parseNetwork(
    `network: Row\nformat: 1\nfeeds: {f: {flow: 6 L/min, to: bed}}\ncompartments: {bed: {kind: part, use: core.yaml, repeat: 2, to: out}}\noutlets: [out]\n`,
    { path: "row.yaml", read: () => core },
  );
  const page = equationsMarkdown(compile(document as NonNullable<typeof document>).plant as Plant);
  expect(page).toContain("| $Q_{\\text{bed.feed}} = Q_{\\text{bed.1.feed}}$ | 6 L/min |");
});

test("flows between the cells of a table are said to come from its line", () => {
  const path = "networks/zoned/lattice.yaml";
  const text = readFileSync(path, "utf8");
  const { document } = parseNetwork(text, { path, read: (file) => readFileSync(file) });
  const plant = compile(document as NonNullable<typeof document>).plant as Plant;
  const inside = linksOf(plant).filter((l) => l.says.startsWith("inside "));
  expect(inside.length).toBeGreaterThan(10);
  for (const l of inside) expect(lineIn(text, l.line)).toContain("    flows:");
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

test("a number written bare is printed bare beside shares in %, and so is what is made of it", () => {
  const text = `network: A
format: 1
constants: {peclet: 5, twice: 2 * peclet, share: 20 %, rest-of-it: 1 - share}
feeds: {f: {flow: 1 L/min, to: {tube: rest, out: rest-of-it / 2}}}
compartments: {tube: {kind: dispersed, volume: 100 L, peclet: twice, ends: closed, to: out}}
outlets: [out]
`;
  const page = equationsMarkdown(plantOf(text));
  const shown = (symbol: string) =>
    page
      .split("\n")
      .find((l) => l.startsWith(`| $${symbol}`))
      ?.split(" | ")[1];
  expect(shown("\\text{peclet}$")).toBe("5");
  expect(shown("\\text{twice}$")).toBe("10");
  expect(shown("\\text{share}$")).toBe("20 %");
  expect(shown("\\text{rest-of-it}$")).toBe("80 %");
  expect(shown("\\text{peclet}_{")).toBe("10");
});

test("by mass the whole balance is one of mass, not of a liquid", () => {
  const page = equationsMarkdown(
    plantOf(
      "network: P\nformat: 1\nbasis: mass\nfeeds: {powder: {flow: 2 kg/h, to: drum}}\ncompartments: {drum: {kind: stirred, volume: 4 kg, to: out}}\noutlets: [out]\n",
    ),
  );
  expect(page).toContain("Mass: $Q_{\\text{powder}} = Q_{\\text{out}}$, that is 2 kg/h in and 2 kg/h out.");
  expect(page).not.toContain("Liquid");
});
