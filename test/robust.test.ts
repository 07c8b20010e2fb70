import { readdirSync, readFileSync } from "node:fs";
import { dirname, join, relative } from "node:path";
import { describe, expect, test } from "vitest";
import { parseAny } from "../src/parse/any.js";
import { printProblems } from "../src/problems/print.js";
import type { Problem } from "../src/problems/problem.js";
import { uniformSource } from "./simulate/seeded.js";
import { vessels } from "./simulate/vessels.js";

const root = join(import.meta.dirname, "..");

/** Every document that is shipped, and the vessels of the closed forms. */
const texts = new Map<string, string>(
  ["networks", "shared"].flatMap((folder) =>
    readdirSync(join(root, folder), { recursive: true, encoding: "utf8" })
      .filter((file) => file.endsWith(".yaml"))
      .map((file): [string, string] => [`${folder}/${file}`, readFileSync(join(root, folder, file), "utf8")]),
  ),
);
for (const name in vessels) texts.set(`vessels/${name}.yaml`, vessels[name]);

function read(path: string): Uint8Array | string | undefined {
  const known = texts.get(path);
  if (known !== undefined) return known;
  try {
    return readFileSync(join(root, relative(".", path)));
  } catch {
    return undefined;
  }
}

/** Seconds; an input takes well below 2 on a machine of its own. The room above is for one that has other work. */
const patience = 10;

/** Parses and prints; fails where that throws, says nothing sensible or takes too long. */
function survives(text: string, path: string): readonly Problem[] {
  const start = performance.now();
  const { problems } = parseAny(text, { path, read });
  const printed = printProblems(problems);
  expect((performance.now() - start) / 1000).toBeLessThan(patience);
  // What the text itself says may come back in a message.
  for (const word of ["[object", "NaN", "undefined"]) if (!text.includes(word)) expect(printed).not.toContain(word);
  for (const { at } of problems) {
    expect(at.from).toBeGreaterThanOrEqual(0);
    expect(at.to).toBeGreaterThanOrEqual(at.from);
    expect(at.to).toBeLessThanOrEqual(at.source.text.length);
  }
  return problems;
}

type Random = () => number;
const pick = <T>(random: Random, from: readonly T[]): T => from[Math.floor(random() * from.length)];
const place = (random: Random, text: string): number => Math.floor(random() * text.length);

const odd = [
  ...[
    "__proto__",
    "constructor",
    "toString",
    "NaN",
    "1e999",
    "-1 L",
    "0 L/min",
    ".inf",
    "null",
    "~",
    "[]",
    "{}",
    "rest",
  ],
  ...[
    "1000000000",
    "&a",
    "*a",
    "<<",
    "!!js/function",
    "\u0000",
    "\ud800",
    "\u202e",
    "\t",
    "\r",
    "±",
    "|",
    ">",
    "- -",
    "? ?",
  ],
  ...["((((((((", "1 L + ", "2^2^2^9", "max(", "{a: {a: {a: 1}}}", "'", '"', "#", ": ", "%", "---\n", "...\n", "🧪"],
];

/** One thing done to a text, as slips and broken transfers do. */
const mutations: readonly ((text: string, random: Random) => string)[] = [
  (text, random) => {
    const at = place(random, text);
    return text.slice(0, at) + text.slice(at + 1 + Math.floor(random() * 4));
  },
  (text, random) => {
    const at = place(random, text);
    return text.slice(0, at) + pick(random, odd) + text.slice(at);
  },
  (text, random) => {
    const [a, b] = [place(random, text), place(random, text)];
    return text.slice(0, a) + text.slice(b, b + 30) + text.slice(a);
  },
  (text, random) => text.slice(0, place(random, text)),
  (text, random) => {
    const lines = text.split("\n");
    const [a, b] = [place(random, text) % lines.length, place(random, text) % lines.length];
    [lines[a], lines[b]] = [lines[b], lines[a]];
    return lines.join("\n");
  },
  (text, random) => {
    const lines = text.split("\n");
    const at = place(random, text) % lines.length;
    lines.splice(at, 0, lines[at]);
    return lines.join("\n");
  },
  (text, random) => {
    const lines = text.split("\n");
    const at = place(random, text) % lines.length;
    lines[at] = random() < 0.5 ? `  ${lines[at]}` : lines[at].trimStart();
    return lines.join("\n");
  },
  (text, random) => {
    const words = text.match(/[\w.-]+/g) ?? [""];
    return text.replace(pick(random, words), pick(random, random() < 0.5 ? words : odd));
  },
  (text, random) => text.replace(/: ([^:{}[\],\n]+)/, () => `: ${pick(random, odd)}`),
];

test("slips of every kind in every shipped document are problems or nothing, never a crash", () => {
  const random = uniformSource(20261204);
  const names = [...texts.keys()];
  let broken = 0;
  for (let i = 0; i < 220; i++) {
    const path = names[i % names.length];
    let text = texts.get(path) ?? "";
    for (let k = 0; k <= i % 3; k++) text = pick(random, mutations)(text, random);
    if (survives(text, path).length > 0) broken++;
  }
  expect(broken).toBeGreaterThan(100);
});

describe("on purpose", () => {
  const network = (compartment: string, more = "") =>
    `network: A\nformat: 1\n${more}feeds: {feed: {flow: 1 L/min, to: a}}\ncompartments:\n  a: ${compartment}\noutlets: [out]\n`;
  const tank = "{kind: stirred, volume: 1 L, to: out}";
  const many = <T>(n: number, f: (i: number) => T): T[] => Array.from({ length: n }, (_, i) => f(i));
  const codes = (text: string): string[] => [...new Set(survives(text, "a.yaml").map((p) => p.code))];

  test.each([
    ["nothing", "", ["empty-file"]],
    ["a thousand million tanks", network("{kind: stirred, repeat: 1000000000, volume: 1 L, to: out}"), ["not-whole"]],
    ["ten thousand tanks", network("{kind: stirred, repeat: 10000, volume: 1 L, to: out}"), []],
    ["a number beyond numbers", network("{kind: stirred, volume: 1e999 L, to: out}"), ["bad-number"]],
    ["a prototype as a name", network(tank, "constants: {__proto__: 1 L}\n"), ["forbidden-key"]],
    ["a constructor as a name", network(tank, "constants: {constructor: 1 L}\n"), ["unused-name"]],
    [
      "names of objects' own",
      network("{kind: toString, volume: valueOf, to: hasOwnProperty}"),
      ["wrong-choice", "unknown-place"],
    ],
    ["a kind from the prototype", network("{kind: constructor, volume: 1 L, to: out}"), ["wrong-choice"]],
    ["a tower of powers", network("{kind: stirred, volume: 1 L * 9^9^9^9, to: out}"), ["not-finite"]],
    ["a million letters", network("{kind: stirred, volume: 1 L, to: out}", `notes: ${"x".repeat(1e6)}\n`), []],
    ["a million letters for a name", network(tank, `constants: {${"x".repeat(1e6)}: 1 L}\n`), ["unused-name"]],
    ["a value of a million letters", network(`{kind: stirred, volume: ${"x".repeat(1e6)}, to: out}`), ["unknown-name"]],
    [
      "a value of 100,000 terms",
      network(`{kind: stirred, volume: ${many(1e5, () => "1 L").join(" + ")}, to: out}`),
      undefined,
    ],
    [
      "100,000 brackets in a value",
      network(`{kind: stirred, volume: ${"(".repeat(1e5)}1 L${")".repeat(1e5)}, to: out}`),
      undefined,
    ],
    ["100,000 signs in a value", network(`{kind: stirred, volume: ${"- ".repeat(1e5)}1 L, to: out}`), undefined],
    ["100,000 powers in a value", network(`{kind: stirred, volume: 1 L * ${"1^".repeat(1e5)}1, to: out}`), undefined],
    ["10,000 nested lists", `network: ${"[".repeat(1e4)}\n`, undefined],
    ["2,000 steps in", many(2000, (i) => `${" ".repeat(i)}a:`).join("\n"), ["too-deep"]],
    [
      "a chain of 1,000 tanks",
      network("{kind: stirred, volume: 1 L, to: b0}", "").replace(
        "outlets",
        `${many(1000, (i) => `  b${i}: {kind: stirred, volume: 1 L, to: ${i < 999 ? `b${i + 1}` : "out"}}`).join("\n")}\noutlets`,
      ),
      [],
    ],
    [
      "a circle of 200 constants",
      network(
        "{kind: stirred, volume: c0, to: out}",
        `constants:\n${many(200, (i) => `  c${i}: c${(i + 1) % 200} + 1 L`).join("\n")}\n`,
      ),
      ["circular-names"],
    ],
    [
      "constants in a row of 5,000",
      network(
        "{kind: stirred, volume: c0, to: out}",
        `constants:\n${many(5000, (i) => `  c${i}: ${i < 4999 ? `c${i + 1}` : "1 L"}`).join("\n")}\n`,
      ),
      [],
    ],
    [
      "values that double 60 times",
      network(
        "{kind: stirred, volume: c0, to: out}",
        `constants:\n${many(60, (i) => `  c${i}: ${i < 59 ? `c${i + 1} + c${i + 1}` : "1e-18 L"}`).join("\n")}\n`,
      ),
      [],
    ],
    [
      "9 aliases of 9 aliases, 9 deep",
      many(9, (i) => `a${i}: &a${i} [${i === 0 ? "x" : many(9, () => `*a${i - 1}`).join(", ")}]`).join("\n"),
      ["too-many-copies"],
    ],
    [
      "40 parameters with bounds",
      network(
        "{kind: stirred, volume: p0, to: out}",
        `parameters:\n${many(40, (i) => `  p${i}: {value: ${i < 39 ? `p${i + 1}` : "1 L"}, between: [0 L, 2 L]}`).join("\n")}\n`,
      ),
      [],
    ],
    ["a binary file", many(5000, (i) => String.fromCharCode((i * 7919) % 256)).join(""), undefined],
  ] as [string, string, string[] | undefined][])("%s", (_, text, expected) => {
    const found = codes(text);
    if (expected) expect(found).toEqual(expected);
    else expect(found.length).toBeGreaterThan(0);
  });
});

test("paths stay where they are: a document that names itself, or files above", () => {
  const study = "study: Itself\nformat: 1\nrivals: [itself.yaml]\nchanges: [itself.yaml]\n";
  texts.set("itself.yaml", study);
  expect(survives(study, "itself.yaml").map((p) => p.code)).toContain("wrong-document");
  const trial = `trial: A\nformat: 1\nvessel: ${"../".repeat(50)}x.yaml\ninjection: {at: feed, pulse: 1 g}\nreadings: [{at: out}]\n`;
  expect(survives(trial, `${dirname("a/b/c")}/t.yaml`).map((p) => p.code)).toEqual(["file-missing"]);
});
