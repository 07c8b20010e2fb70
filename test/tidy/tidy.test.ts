import { readFileSync } from "node:fs";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { compile } from "../../src/compile/compile.js";
import { parseNetwork } from "../../src/parse/network.js";
import { collector } from "../../src/problems/report.js";
import type { MapNode } from "../../src/read/tree.js";
import { readYaml } from "../../src/read/yaml.js";
import { sameMeaning, tidy } from "../../src/tidy/tidy.js";
import { scribble, seeded } from "./scribble.js";
import { shipped } from "./shipped.js";

const tidied = (text: string): string => {
  const { text: out, problems } = tidy(text);
  expect(problems).toEqual([]);
  return out as string;
};

const treeOf = (text: string): MapNode => readYaml({ path: "x.yaml", text }, collector().report) as MapNode;

describe("layout", () => {
  test("keys in the order of their declaration, two spaces a level, comments where they belong", async () => {
    const text = readFileSync("test/tidy/careless.txt", "utf8");
    await expect(tidied(text)).toMatchFileSnapshot("careless.tidied.txt");
  });

  test("quotes, numbers and anchors stay as they were typed", () => {
    const text = `network: "A \\u00e9"\nformat: 1\nconstants: {a: &x 1e3 L, b: *x, c: '2.50 L', d: 007 }\n`;
    expect(tidied(text)).toBe(
      `network: "A \\u00e9"\nformat: 1\nconstants: {a: &x 1e3 L, b: *x, c: '2.50 L', d: 007}\n`,
    );
  });

  test("an alias never comes before its anchor", () => {
    const text =
      "network: A\nformat: 1\noutlets: [out]\ncompartments:\n  a: &same {kind: stirred, volume: 1 L, to: out}\n  b: *same\nfeeds: {f: {flow: 1 L/s, to: a}}\nnotes: n\n";
    expect(tidied(text).split("\n")[2]).toBe("notes: n");
    const tied = "network: A\nformat: 1\ncompartments: {a: {kind: dead, volume: &v 1 L}}\nconstants: {c: *v}\n";
    expect(tidied(tied)).toBe(tied);
  });

  test("an anchor that is named anew keeps its aliases", () => {
    const text = "network: A\nformat: 1\noutlets: [&n a]\nrequires: [*n]\nfeeds: {x: {to: &n b, flow: *n}}\n";
    const before = treeOf(text);
    expect(sameMeaning(before, treeOf(tidied(text)))).toBe(true);
  });

  test("braces open up where they are longer than 100 columns, or hold comments", () => {
    const fits = `  a: {value: 1 L, about: ${"x".repeat(100 - 26)}}`;
    expect(fits).toHaveLength(100);
    const head = "network: A\nformat: 1\nconstants:\n";
    expect(tidied(`${head}${fits}\n`)).toBe(`${head}${fits}\n`);
    expect(tidied(`${head}${fits.replace("about: ", "about: y")}\n`)).toBe(
      `${head}  a:\n    value: 1 L\n    about: y${"x".repeat(74)}\n`,
    );
    expect(tidied(`${head}  a: {value: 1 L, # why\n     about: y}\n`)).toBe(
      `${head}  a:\n    value: 1 L  # why\n    about: y\n`,
    );
  });

  test("a block text keeps its lines, its own indent and its end", () => {
    const text = "network: A\nnotes: |+2 # kept\n      far\n    near\n\n\nformat: 1\n";
    expect(tidied(text)).toContain("notes: |+2  # kept\n      far\n    near\n\n\n");
    const chain = "network: A\nnotes:   >\n\n     one\n     two\n\n\n\nformat: 1\n";
    expect(tidied(chain)).toBe("network: A\n\nformat: 1\nnotes: >\n\n  one\n  two\n");
  });

  test("the modeline comes first, and line ends stay what they were", () => {
    const text = "# made by hand\r\n# yaml-language-server: $schema=n.json\r\n\r\nformat: 1\r\nnetwork: A\r\n";
    expect(tidied(text)).toBe(
      "# yaml-language-server: $schema=n.json\r\n# made by hand\r\n\r\nnetwork: A\r\nformat: 1\r\n",
    );
  });

  test("unknown keys come after the known, in the author's order", () => {
    expect(tidied("zeta: 1\nnetwork: A\nalpha: 2\nformat: 1\n")).toBe("network: A\nformat: 1\nzeta: 1\nalpha: 2\n");
  });
});

describe("what is left alone", () => {
  test.each([
    ["no YAML", "network: A\nformat: [", "unclosed"],
    ["a comma that cuts a call", "network: A\nformat: 1\nconstants: {a: max(1 L, 2 L)}\n", "comma-in-braces"],
    ["a document of another language", "title: A\n", "unknown-document"],
    ["a key over several lines", "network: A\nformat: 1\nconstants:\n  ? one\n    two\n  : 1 L\n", "not-tidied"],
  ])("%s", (_, text, code) => {
    const { text: out, problems } = tidy(text);
    expect(out).toBeUndefined();
    expect(problems.map((p) => p.code)).toEqual([code]);
  });
});

describe("laws", () => {
  test.each(shipped)("%s is tidy", (file) => {
    const text = readFileSync(file, "utf8");
    expect(tidied(text)).toBe(text);
  });

  test("however a document is typed: the same meaning, every comment once, and once is enough", () => {
    const trees = shipped.map((file) => treeOf(readFileSync(file, "utf8")));
    fc.assert(
      fc.property(fc.nat(trees.length - 1), fc.integer(), (which, seed) => {
        const { text, comments } = scribble(trees[which], seeded(seed));
        const before = treeOf(text);
        const out = tidied(text);
        expect(sameMeaning(before, treeOf(out))).toBe(true);
        const notes = [...out.matchAll(/# note (\d+)$/gm)].map((m) => Number(m[1]));
        expect(notes.sort((a, b) => a - b)).toEqual(Array.from({ length: comments }, (_, i) => i));
        expect(tidied(out)).toBe(out);
        for (const line of out.split("\n")) expect(line).toBe(line.trimEnd());
      }),
      { numRuns: 150 },
    );
  });

  test("flows, volumes and units of print are what they were", () => {
    const read = (text: string) => {
      const { document } = parseNetwork(text);
      const plant = document && compile(document).plant;
      if (!plant) return undefined;
      // Bodies that are formulas hold functions, which are never alike.
      const nodes = plant.nodes.map(({ name, part, volume, inflow }) => ({ name, part, volume, inflow }));
      return { streams: plant.streams, nodes, units: document.units.time.name };
    };
    const networks = shipped.filter((f) => f.startsWith("networks") && parseNetwork(readFileSync(f, "utf8")).document);
    expect(networks.length).toBeGreaterThan(3);
    fc.assert(
      fc.property(fc.constantFrom(...networks), fc.integer(), (file, seed) => {
        const { text } = scribble(treeOf(readFileSync(file, "utf8")), seeded(seed));
        const before = read(text);
        if (!before)
          console.log(
            text,
            parseNetwork(text).problems.map((p) => p.message),
          );
        expect(before).toBeDefined();
        expect(read(tidied(text))).toEqual(before);
      }),
      { numRuns: 40 },
    );
  });
});
