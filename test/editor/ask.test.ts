import { readFileSync } from "node:fs";
import { expect, describe as group, test } from "vitest";
import { complete, definition, describe, treeOf } from "../../src/editor/ask.js";

const both = readFileSync("networks/demo/both.yaml", "utf8");

/** A text with the cursor at `|`. */
function cursor(marked: string) {
  const offset = marked.indexOf("|");
  const text = marked.replace("|", "");
  return { open: { text, known: treeOf(text) }, offset };
}
const labels = (marked: string): string[] => {
  const { open, offset } = cursor(marked);
  return complete(open, offset).offers.map((o) => o.label);
};
const says = (marked: string): string => {
  const { open, offset } = cursor(marked);
  return describe(open, offset)?.says ?? "";
};

const vessel = `network: A
format: 1
parameters:
  slip: {value: 10 %, between: [0 %, 50 %], about: what slips past}
feeds: {raw: {flow: 1 L/min, to: {tank: rest, out: slip}}}
compartments:
  tank: {kind: stirred, volume: 30 L, to: out}
outlets: [out]
`;

group("what a key or word means", () => {
  test("the declaration's own words, also inside flow maps", () => {
    expect(says(vessel.replace("volume:", "vol|ume:"))).toMatch(/^\*\*volume\*\*: .*must be there/s);
    expect(says(vessel.replace("outlets", "out|lets"))).toContain("**outlets**");
    expect(says("trial: A\nformat: 1\nreadings:\n  - at: a\n    base|line: drift\n")).toContain("**baseline**");
  });

  test("a kind of compartment, and a name of the document with what it is", () => {
    expect(says(vessel.replace("stirred", "stir|red"))).toMatch(/^\*\*stirred\*\*: /);
    expect(says(vessel.replace("out: slip", "out: sl|ip"))).toMatch(/parameter, line 4\n\nwhat slips past/);
    expect(says(vessel.replace("A\n", "A|\n"))).toBe("");
  });
});

group("what may be typed", () => {
  test("keys that are not there yet, of the kind that is chosen", () => {
    const keys = labels("network: A\nformat: 1\ncompartments:\n  tank:\n    kind: dispersed\n    |\n");
    expect(keys).toContain("peclet");
    expect(keys).not.toContain("tanks");
    expect(keys).not.toContain("kind");
    expect(labels("network: A\nformat: 1\n|")).toContain("compartments");
    expect(labels("|")).toEqual(["network", "trial", "chemistry", "duty", "study"]);
  });

  test("words of a choice; names where streams go, and `rest`; parameters in values", () => {
    expect(labels(vessel.replace("kind: stirred", "kind: |"))).toContain("tubular");
    expect(labels(vessel.replace("to: out}", "to: |}"))).toEqual(["tank", "out"]);
    expect(labels(vessel.replace("out: slip", "out: |"))).toEqual(["rest", "slip"]);
    expect(labels(vessel.replace("30 L", "|"))).toEqual(["slip"]);
  });

  test("while the text is broken, names of what it was before", () => {
    const broken = vessel.replace("to: out}", "to: ");
    const offset = broken.indexOf("volume: 30 L, to: ") + "volume: 30 L, to: ".length;
    const { offers } = complete({ text: broken, known: treeOf(vessel) }, offset);
    expect(offers.map((o) => o.label)).toEqual(["tank", "out"]);
  });
});

group("where a name is declared", () => {
  test("constants, bodies and members; files by their path", () => {
    const at = (marked: string) => {
      const { open, offset } = cursor(marked);
      const found = definition(open, offset);
      return found && "at" in found ? open.text.slice(0, found.at.from).split("\n").length : found;
    };
    expect(at(vessel.replace("out: slip", "out: sl|ip"))).toBe(4);
    expect(at(vessel.replace("tank: rest", "ta|nk: rest"))).toBe(7);
    expect(at(vessel.replace("30 L", "raw|.flow * 1 min"))).toBe(5);
    expect(at("study: A\nrivals: [a.yaml, ../b/c|.yaml]\n")).toEqual({ file: "../b/c.yaml" });
    expect(at(vessel.replace("30 L", "nothing|"))).toBeUndefined();
  });
});

test("every place of a shipped network is answered without a throw, and every key is described", () => {
  const open = { text: both, known: treeOf(both) };
  for (let k = 0; k <= both.length; k += 3) {
    complete(open, k);
    definition(open, k);
    describe(open, k);
  }
  for (const key of ["parameters", "feeds", "compartments", "outlets", "constants"]) {
    const k = both.indexOf(`\n${key}:`);
    if (k >= 0) expect(describe(open, k + 2)?.says).toContain(`**${key}**`);
  }
});
